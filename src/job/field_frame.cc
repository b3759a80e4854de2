#include "job/field_frame.h"

#include <charconv>
#include <new>

#include "core/error.h"
#include "image/digest.h"
#include "job/output_folder.h"
#include "random/counters.h"
#include "report/versions.h"

namespace stillfield {
namespace {

namespace fs = std::filesystem;

std::string sample_name(const SampleFormat& format) {
  const std::string bits = std::to_string(format.bits) + "-bit ";
  switch (format.kind) {
    case SampleKind::kUnsigned:
      return bits + "unsigned integer";
    case SampleKind::kSigned:
      return bits + "signed integer";
    case SampleKind::kFloat:
      return bits + "float";
  }
  return {};
}

InputFacts describe_input(const FieldTask& task, const Field& field) {
  InputFacts input;
  input.path = task.name_in_tables();
  input.sha256 = task.sha256.empty() ? sha256_of_file(task.file) : task.sha256;
  if (task.stamp.bytes >= 0) check_unchanged(task.file, task.stamp);
  input.bytes = static_cast<std::int64_t>(fs::file_size(task.file));
  input.page = task.page + 1;
  input.pages = task.pages;
  input.width = field.pixels.width();
  input.height = field.pixels.height();
  input.samples = sample_name(field.format);
  input.channels = field.channels_in_file;
  input.pixel_size_um = field.pixel_size_um.value_or(kUnknown);
  input.pixel_size_from = name_of(field.pixel_size_source);
  if (field.ome) input.plane = describe(*field.ome);
  input.notes = field.notes;
  return input;
}

std::string hexadecimal(std::uint64_t value) {
  char digits[16];
  const auto end = std::to_chars(digits, digits + sizeof digits, value, 16);
  return "0x" + std::string(digits, end.ptr);
}

// Rooms that see pixels alone do not know the name of the file.
std::string with_name(const FieldTask& task, const std::string& sentence) {
  const bool named =
      sentence.rfind(task.file.string(), 0) == 0 || sentence.rfind(task.stem.string(), 0) == 0;
  return named ? sentence : task.name() + ": " + sentence;
}

}  // namespace

std::uint64_t seed_of(std::uint64_t seed, const std::string& sha256, int page) {
  std::vector<std::uint8_t> digest(sha256.size() / 2);
  for (std::size_t i = 0; i < digest.size(); ++i) {
    std::from_chars(sha256.data() + 2 * i, sha256.data() + 2 * i + 2, digest[i], 16);
  }
  return image_seed(seed, digest, static_cast<std::uint32_t>(page));
}

std::uint64_t begin_record(const FieldTask& task, const Field& field, const std::string& command,
                           const std::vector<NamedValue>& settings, std::uint64_t seed,
                           ImageRecord& record) {
  record.command = command;
  record.version = program_version();
  for (const LibraryVersion& library : library_versions()) {
    record.libraries.push_back({library.name, library.version});
  }
  record.input = describe_input(task, field);
  record.settings = settings;
  record.settings_digest = settings_digest(settings, record.input.sha256, record.input.page);
  const std::uint64_t of_image = seed_of(seed, record.input.sha256, task.page);
  record.image_seed = hexadecimal(of_image);
  return of_image;
}

void use_pixel_size(double um, Field& field) {
  field.pixel_size_um = um;
  field.pixel_size_source = PixelSizeSource::kOption;
  if (field.ome) field.ome->voxel.x_um = field.ome->voxel.y_um = um;
}

TiffOptions map_options(const Field& field) {
  TiffOptions options;
  options.pixel_size_um = field.pixel_size_um;
  if (field.ome) options.ome = OmeOutput{field.ome->image, field.ome->channel, field.ome->voxel};
  return options;
}

void list_output(const FieldTask& task, const std::string& suffix, ImageRecord& record) {
  const fs::path file = with_suffix(task.stem, suffix);
  record.outputs.push_back(
      {suffix, static_cast<std::int64_t>(fs::file_size(file)), sha256_of_file(file)});
}

ImageRecord with_file_named(const FieldTask& task, const std::function<ImageRecord()>& job) {
  try {
    return job();
  } catch (const Error& error) {
    if (error.kind() == ErrorKind::kInterrupt) throw;
    throw Error(error.kind(), with_name(task, error.what()));
  } catch (const std::bad_alloc&) {
    throw Error(ErrorKind::kInput, task.name() +
                                       ": there is not enough memory for this image; cut it into "
                                       "parts or use a machine with more memory");
  } catch (const fs::filesystem_error& error) {
    throw Error(ErrorKind::kOutput, task.name() + ": " + error.code().message() +
                                        "; check the input and the output folder");
  }
}

}  // namespace stillfield
