#include "job/light_files.h"

#include <cmath>

#include "core/error.h"
#include "image/digest.h"

namespace stillfield {
namespace {

namespace fs = std::filesystem;

std::string size_text(const Extent& e) {
  return std::to_string(e.width) + " x " + std::to_string(e.height);
}

// The mean of all pages; zeros for an empty path.
Volume<double> mean_page(const fs::path& file, const char* what, const Extent& extent,
                         const ReadLimits& limits) {
  Volume<double> mean(extent);
  if (file.empty()) return mean;
  const int pages = count_pages(file);
  for (int page = 0; page < pages; ++page) {
    const Field field = read_page(file, page, limits);
    if (!(field.pixels.extent() == extent)) {
      throw Error(ErrorKind::kInput, std::string("its ") + what + " " + file.string() + " has " +
                                         size_text(field.pixels.extent()) +
                                         " pixels and the image " + size_text(extent) +
                                         "; give one of the same size");
    }
    for (int y = 0; y < extent.height; ++y) {
      for (int x = 0; x < extent.width; ++x) {
        mean.at(x, y) += static_cast<double>(field.pixels.at(x, y)) / pages;
      }
    }
  }
  return mean;
}

// The flat field above the background, over its mean; ones without a flat field.
Volume<double> relative_light(const LightFiles& files, const Volume<double>& background,
                              const ReadLimits& limits) {
  const Extent extent = background.extent();
  Volume<double> light = mean_page(files.flat_field, "flat field", extent, limits);
  double sum = 0;
  for (int y = 0; y < extent.height; ++y) {
    double row = 0;
    for (int x = 0; x < extent.width; ++x) {
      double& f = light.at(x, y);
      f = files.flat_field.empty() ? 1.0 : f - background.at(x, y);
      if (!(f > 0) || !std::isfinite(f)) {
        throw Error(ErrorKind::kInput,
                    "its flat field " + files.flat_field.string() + " is not above " +
                        (files.background.empty() ? "0" : "the background") + " at column " +
                        std::to_string(x + 1) + " of row " + std::to_string(y + 1) +
                        "; take it with light all over, or mend the pixel");
      }
      row += f;
    }
    sum += row;
  }
  const double mean = sum / static_cast<double>(extent.sites());
  for (int y = 0; y < extent.height; ++y) {
    for (int x = 0; x < extent.width; ++x) light.at(x, y) /= mean;
  }
  return light;
}

void correct(const Volume<double>& background, const Volume<double>& light, Volume<float>& plane) {
  for (int y = 0; y < plane.height(); ++y) {
    for (int x = 0; x < plane.width(); ++x) {
      plane.at(x, y) = static_cast<float>((plane.at(x, y) - background.at(x, y)) / light.at(x, y));
    }
  }
}

std::string digest_of(const fs::path& file, const char* option) {
  if (file.empty()) return {};
  if (!fs::is_regular_file(file)) {
    throw Error(ErrorKind::kInput, file.string() + ": there is no such file for " + option +
                                       "; check the spelling of the path");
  }
  return sha256_of_file(file);
}

}  // namespace

void name_light_files(const LightFiles& files, std::vector<NamedValue>& settings) {
  const auto add = [&settings](const std::string& name, const fs::path& file,
                               const std::string& sha256) {
    if (file.empty()) return;
    settings.push_back({name, file.generic_string()});
    settings.push_back({name + "_sha256", sha256});
  };
  add("flat_field", files.flat_field, files.flat_field_sha256);
  add("background", files.background, files.background_sha256);
}

void digest_light_files(LightFiles& files) {
  files.flat_field_sha256 = digest_of(files.flat_field, "--flat-field");
  files.background_sha256 = digest_of(files.background, "--background");
}

void correct_light(const LightFiles& files, const ReadLimits& limits, Field& field) {
  if (!files.any()) return;
  const Volume<double> background =
      mean_page(files.background, "background", field.pixels.extent(), limits);
  const Volume<double> light = relative_light(files, background, limits);
  correct(background, light, field.pixels);
  for (Volume<float>& plane : field.colour) correct(background, light, plane);
  std::string note = "grey values are those";
  if (!files.background.empty()) note += " above the background";
  if (!files.flat_field.empty()) {
    note += files.background.empty() ? " divided by the flat field" : ", divided by the flat field";
  }
  field.notes.push_back(std::move(note));
}

}  // namespace stillfield
