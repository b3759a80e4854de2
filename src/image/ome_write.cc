#include <charconv>
#include <pugixml.hpp>

#include "image/ome.h"
#include "image/utf8.h"

namespace stillfield {
namespace {

constexpr char kSchema[] = "http://www.openmicroscopy.org/Schemas/OME/2016-06";
constexpr char kInstance[] = "http://www.w3.org/2001/XMLSchema-instance";

class TextWriter : public pugi::xml_writer {
 public:
  explicit TextWriter(std::string& text) : text_(text) {}
  void write(const void* data, std::size_t size) override {
    text_.append(static_cast<const char*>(data), size);
  }

 private:
  std::string& text_;
};

// The shortest text that reads back as the same number, whatever the locale.
std::string shortest(double value) {
  char digits[32];
  return {digits, std::to_chars(digits, digits + sizeof digits, value).ptr};
}

void set(pugi::xml_node node, const char* name, const std::string& value) {
  node.append_attribute(name).set_value(value.c_str());
}

void set(pugi::xml_node node, const char* name, int value) {
  node.append_attribute(name).set_value(value);
}

void set_length(pugi::xml_node pixels, const std::string& name, std::optional<double> um) {
  if (!um) return;
  set(pixels, name.c_str(), shortest(*um));
  set(pixels, (name + "Unit").c_str(), "\xc2\xb5m");
}

}  // namespace

std::string ome_xml(const OmeOutput& output, const OmePixels& pixels) {
  const auto pages = static_cast<int>(pixels.pages.size());
  const bool times = output.axis == PageAxis::kTimes;
  const int channels = times ? 1 : pages;

  pugi::xml_document document;
  auto declaration = document.append_child(pugi::node_declaration);
  set(declaration, "version", "1.0");
  set(declaration, "encoding", "UTF-8");
  auto root = document.append_child("OME");
  set(root, "xmlns", kSchema);
  set(root, "xmlns:xsi", kInstance);
  set(root, "xsi:schemaLocation", std::string(kSchema) + " " + kSchema + "/ome.xsd");
  set(root, "Creator", "stillfield");
  auto image = root.append_child("Image");
  set(image, "ID", "Image:0");
  if (!output.image.empty()) set(image, "Name", printable_utf8(output.image));

  auto data = image.append_child("Pixels");
  set(data, "ID", "Pixels:0");
  set(data, "DimensionOrder", times ? "XYZTC" : "XYZCT");
  set(data, "Type", pixels.type);
  set(data, "SizeX", pixels.width);
  set(data, "SizeY", pixels.height);
  set(data, "SizeZ", pixels.depth);
  set(data, "SizeC", channels * pixels.samples);
  set(data, "SizeT", times ? pages : 1);
  set_length(data, "PhysicalSizeX", output.voxel.x_um);
  set_length(data, "PhysicalSizeY", output.voxel.y_um);
  set_length(data, "PhysicalSizeZ", output.voxel.z_um);
  set(data, "BigEndian", "false");
  for (int c = 0; c < channels; ++c) {
    auto channel = data.append_child("Channel");
    set(channel, "ID", "Channel:0:" + std::to_string(c));
    const std::string& page_name = pixels.pages[static_cast<std::size_t>(c)];
    const std::string& name = times || page_name.empty() ? output.channel : page_name;
    if (!name.empty()) set(channel, "Name", printable_utf8(name));
    set(channel, "SamplesPerPixel", pixels.samples);
  }
  for (int page = 0; page < pages; ++page) {
    for (int z = 0; z < pixels.depth; ++z) {
      auto plane = data.append_child("TiffData");
      set(plane, "FirstZ", z);
      set(plane, "FirstC", times ? 0 : page);
      set(plane, "FirstT", times ? page : 0);
      set(plane, "IFD", page * pixels.depth + z);
      set(plane, "PlaneCount", 1);
    }
  }
  std::string text;
  TextWriter writer(text);
  document.save(writer, "", pugi::format_raw, pugi::encoding_utf8);
  return text;
}

std::optional<OmePage> page_of(const OmeFile& file, int page) {
  for (const OmeImage& image : file.images) {
    for (const OmePlane& plane : image.planes) {
      if (plane.page != page) continue;
      const auto c = static_cast<std::size_t>(plane.c);
      const bool named = c < image.channel_names.size();
      return OmePage{image.name,     named ? image.channel_names[c] : std::string(),
                     plane,          image.depth,
                     image.channels, image.times,
                     image.voxel};
    }
  }
  return std::nullopt;
}

std::string describe(const OmePage& page) {
  const auto part = [](const char* what, int index, int of) {
    return what + std::to_string(index + 1) + " of " + std::to_string(of);
  };
  return part("z ", page.place.z, page.depth) + ", " +
         part("channel ", page.place.c, page.channels) +
         (page.channel.empty() ? std::string() : " (" + page.channel + ")") + ", " +
         part("time ", page.place.t, page.times);
}

}  // namespace stillfield
