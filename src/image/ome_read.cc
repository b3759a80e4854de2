#include <algorithm>
#include <array>
#include <charconv>
#include <cmath>
#include <cstdint>
#include <pugixml.hpp>
#include <utility>

#include "image/ome.h"
#include "image/utf8.h"

namespace stillfield {
namespace {

constexpr std::size_t kLargestXml = std::size_t{32} << 20;
constexpr std::size_t kStartLooked = 4096;  // comments may stand before the root
constexpr int kLargestAxis = 1 << 30;
constexpr int kMostImages = 10000;

// Names may carry a prefix in front of a colon.
std::string_view local_name(const pugi::xml_node& node) {
  const std::string_view name = node.name();
  const std::size_t colon = name.find(':');
  return colon == std::string_view::npos ? name : name.substr(colon + 1);
}

std::vector<pugi::xml_node> children(const pugi::xml_node& parent, std::string_view name) {
  std::vector<pugi::xml_node> found;
  for (const pugi::xml_node& node : parent.children()) {
    if (node.type() == pugi::node_element && local_name(node) == name) found.push_back(node);
  }
  return found;
}

std::optional<double> number(std::string_view text) {
  double value = 0;
  const auto [end, error] = std::from_chars(text.data(), text.data() + text.size(), value);
  if (error != std::errc() || end != text.data() + text.size()) return std::nullopt;
  return value;
}

// A whole number from `lowest` to 2^30; nothing if the attribute is absent or another.
std::optional<int> whole(const pugi::xml_node& node, const char* attribute, int lowest) {
  const std::string_view text = node.attribute(attribute).value();
  int value = 0;
  const auto [end, error] = std::from_chars(text.data(), text.data() + text.size(), value);
  if (error != std::errc() || end != text.data() + text.size()) return std::nullopt;
  if (value < lowest || value > kLargestAxis) return std::nullopt;
  return value;
}

// Micrometres in a unit of the schema's UnitsLength; 0 for those without a fixed length.
double micrometres(std::string_view unit) {
  static constexpr auto kUnits =
      std::to_array<std::pair<std::string_view, double>>({{"", 1},
                                                          {"\xc2\xb5m", 1},
                                                          {"\xce\xbcm", 1},
                                                          {"um", 1},
                                                          {"pm", 1e-6},
                                                          {"\xc3\x85", 1e-4},
                                                          {"nm", 1e-3},
                                                          {"mm", 1e3},
                                                          {"cm", 1e4},
                                                          {"dm", 1e5},
                                                          {"m", 1e6},
                                                          {"thou", 25.4},
                                                          {"li", 25400.0 / 12},
                                                          {"in", 25400},
                                                          {"ft", 304800},
                                                          {"pt", 25400.0 / 72}});
  for (const auto& [name, length] : kUnits) {
    if (unit == name) return length;
  }
  return 0;
}

std::optional<double> physical_size(const pugi::xml_node& pixels, const std::string& attribute,
                                    std::vector<std::string>& notes) {
  const std::string_view text = pixels.attribute(attribute.c_str()).value();
  if (text.empty()) return std::nullopt;
  const std::string unit = pixels.attribute((attribute + "Unit").c_str()).value();
  const auto value = number(text);
  const double size = value.value_or(0) * micrometres(unit);
  if (std::isfinite(size) && size > 0) return size;
  notes.push_back("OME metadata: " + attribute + " \"" + printable_utf8(text) + " " +
                  printable_utf8(unit) + "\" is no length and left out");
  return std::nullopt;
}

bool is_order(std::string_view order) {
  if (order.size() != 5 || order.substr(0, 2) != "XY") return false;
  std::string axes(order.substr(2));
  std::sort(axes.begin(), axes.end());
  return axes == "CTZ";
}

// The place that lies `step` places after `first` in the order of the file; nothing past the end.
std::optional<OmePlane> place_after(const OmeImage& image, const OmePlane& first,
                                    std::int64_t step) {
  const auto size = [&](char axis) {
    return std::int64_t{axis == 'Z' ? image.depth : axis == 'C' ? image.channels : image.times};
  };
  OmePlane place = first;
  std::int64_t carry = step;
  for (const char axis : image.order.substr(2)) {
    int& at = axis == 'Z' ? place.z : axis == 'C' ? place.c : place.t;
    carry += at;
    at = static_cast<int>(carry % size(axis));
    carry /= size(axis);
  }
  if (carry > 0) return std::nullopt;
  return place;
}

// Whether a TiffData element speaks of another file of the same set.
bool is_elsewhere(const pugi::xml_node& data, std::string_view own_uuid,
                  std::string_view file_name) {
  const auto uuids = children(data, "UUID");
  if (uuids.empty()) return false;
  const std::string_view uuid = uuids.front().child_value();
  if (!own_uuid.empty()) return uuid != own_uuid;
  const std::string_view named = uuids.front().attribute("FileName").value();
  return !named.empty() && named != file_name;
}

// What every part of the document needs.
struct Context {
  std::string_view file_name;
  std::string_view own_uuid;
  int max_planes = 0;            // no page is beyond
  std::int64_t planes_left = 0;  // of all images together, so that many small lies stay small
  std::vector<std::string>& notes;
};

// Fills image.planes from the TiffData elements.
void place_planes(const pugi::xml_node& pixels, Context& context, OmeImage& image) {
  bool outside = false;
  for (const pugi::xml_node& data : children(pixels, "TiffData")) {
    if (is_elsewhere(data, context.own_uuid, context.file_name)) continue;
    const auto directory = whole(data, "IFD", 0);
    OmePlane first{directory.value_or(0), whole(data, "FirstZ", 0).value_or(0),
                   whole(data, "FirstC", 0).value_or(0), whole(data, "FirstT", 0).value_or(0)};
    if (first.z >= image.depth || first.c >= image.channels || first.t >= image.times) {
      outside = true;
      continue;
    }
    // Without a count: one plane if a directory is named, else all that follow.
    const int count = whole(data, "PlaneCount", 0).value_or(directory ? 1 : kLargestAxis);
    for (int i = 0; i < count && context.planes_left > 0; ++i, --context.planes_left) {
      auto place = place_after(image, first, i);
      if (!place || first.page >= context.max_planes - i) break;
      place->page = first.page + i;
      image.planes.push_back(*place);
    }
  }
  if (outside) {
    context.notes.emplace_back("OME metadata: planes outside the sizes it gives are left out");
  }
  const auto by_page = [](const OmePlane& a, const OmePlane& b) { return a.page < b.page; };
  std::stable_sort(image.planes.begin(), image.planes.end(), by_page);
  const auto same_page = [](const OmePlane& a, const OmePlane& b) { return a.page == b.page; };
  image.planes.erase(std::unique(image.planes.begin(), image.planes.end(), same_page),
                     image.planes.end());
}

void read_channels(const pugi::xml_node& pixels, int samples_in_all, OmeImage& image) {
  const auto channels = children(pixels, "Channel");
  image.samples = 1;
  if (!channels.empty()) {
    image.samples = whole(channels.front(), "SamplesPerPixel", 1).value_or(1);
    // Schemas before 2010 left the attribute out: the number of elements then tells.
    const auto elements = static_cast<int>(channels.size());
    const bool counted = channels.front().attribute("SamplesPerPixel");
    if (!counted && samples_in_all % elements == 0) image.samples = samples_in_all / elements;
  }
  if (samples_in_all % image.samples != 0) image.samples = 1;
  image.channels = samples_in_all / image.samples;
  for (const pugi::xml_node& channel : channels) {
    if (static_cast<int>(image.channel_names.size()) == image.channels) break;
    image.channel_names.push_back(printable_utf8(channel.attribute("Name").value()));
  }
}

std::optional<OmeImage> parse_image(const pugi::xml_node& node, Context& context) {
  std::vector<std::string>& notes = context.notes;
  const auto all_pixels = children(node, "Pixels");
  if (all_pixels.empty()) return std::nullopt;
  const pugi::xml_node& pixels = all_pixels.front();
  OmeImage image;
  image.name = printable_utf8(node.attribute("Name").value());
  const auto width = whole(pixels, "SizeX", 1);
  const auto height = whole(pixels, "SizeY", 1);
  const auto depth = whole(pixels, "SizeZ", 1);
  const auto channels = whole(pixels, "SizeC", 1);
  const auto times = whole(pixels, "SizeT", 1);
  if (!width || !height || !depth || !channels || !times) {
    notes.emplace_back("OME metadata: an image without sizes is left out");
    return std::nullopt;
  }
  image.width = *width;
  image.height = *height;
  image.depth = *depth;
  image.times = *times;
  read_channels(pixels, *channels, image);
  const std::string_view order = pixels.attribute("DimensionOrder").value();
  if (is_order(order)) {
    image.order = order;
  } else {
    notes.emplace_back("OME metadata: no valid DimensionOrder; XYZCT is assumed");
  }
  image.voxel = {physical_size(pixels, "PhysicalSizeX", notes),
                 physical_size(pixels, "PhysicalSizeY", notes),
                 physical_size(pixels, "PhysicalSizeZ", notes)};
  place_planes(pixels, context, image);
  return image;
}

}  // namespace

bool is_ome_xml(std::string_view description) {
  const std::size_t start = description.find_first_not_of(" \t\r\n\xef\xbb\xbf");
  if (start == std::string_view::npos || description[start] != '<') return false;
  const std::string_view head = description.substr(start, kStartLooked);
  return head.find("<OME") != std::string_view::npos || head.find(":OME") != std::string_view::npos;
}

OmeFile parse_ome(std::string_view xml, std::string_view file_name, int max_planes) {
  OmeFile file;
  if (xml.size() > kLargestXml) {
    file.notes.emplace_back("OME metadata of more than 32 MiB are left out");
    return file;
  }
  pugi::xml_document document;
  const auto parsed =
      document.load_buffer(xml.data(), xml.size(), pugi::parse_default, pugi::encoding_utf8);
  if (!parsed) {
    file.notes.push_back("OME metadata are damaged and left out (" +
                         std::string(parsed.description()) + ")");
    return file;
  }
  const auto roots = children(document, "OME");
  if (roots.empty()) return file;
  Context context{file_name, roots.front().attribute("UUID").value(), max_planes, max_planes,
                  file.notes};
  const auto images = children(roots.front(), "Image");
  if (images.empty()) {
    const bool elsewhere = !children(roots.front(), "BinaryOnly").empty();
    file.notes.emplace_back(elsewhere ? "OME metadata lie in another file and are not read"
                                      : "OME metadata describe no image");
  }
  if (images.size() > static_cast<std::size_t>(kMostImages)) {
    file.notes.emplace_back("OME metadata of more than 10000 images are left out");
    return file;
  }
  for (const pugi::xml_node& node : images) {
    auto image = parse_image(node, context);
    if (image) file.images.push_back(std::move(*image));
  }
  std::sort(file.notes.begin(), file.notes.end());
  file.notes.erase(std::unique(file.notes.begin(), file.notes.end()), file.notes.end());
  return file;
}

}  // namespace stillfield
