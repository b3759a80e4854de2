#include "job/segment_input.h"

#include <limits>
#include <string>
#include <utility>

#include "core/error.h"
#include "image/read.h"
#include "job/field_frame.h"
#include "job/field_record.h"
#include "job/mask.h"

namespace stillfield {
namespace {

// Pixels outside become missing ones; returns how many.
std::int64_t leave_out(View<const std::uint8_t> usable, Volume<float>& pixels) {
  std::int64_t outside = 0;
  for (int y = 0; y < pixels.height(); ++y) {
    for (int x = 0; x < pixels.width(); ++x) {
      if (usable.at(x, y) != 0) continue;
      pixels.at(x, y) = std::numeric_limits<float>::quiet_NaN();
      ++outside;
    }
  }
  return outside;
}

}  // namespace

SegmentInput read_segment_input(const FieldTask& task, const SegmentSettings& settings,
                                const ReadLimits& limits, ImageRecord& record) {
  SegmentInput input;
  Field field = read_page(task.file, task.page, limits);
  if (settings.pixel_size_um) use_pixel_size(*settings.pixel_size_um, field);
  correct_light(settings.light, limits, field);
  input.seed = begin_record(task, field, kSegment, named_settings(settings), settings.seed, record);
  if (!settings.mask.empty()) {
    input.usable = read_mask(settings.mask, task, field.pixels.extent(), limits);
    const std::int64_t outside = leave_out(input.usable.view(), field.pixels);
    if (outside == field.pixels.extent().sites()) {
      throw Error(ErrorKind::kInput,
                  "its mask is 0 everywhere, so there is nothing to measure; give a mask that is "
                  "not 0 on the pixels to use");
    }
    record.input.notes.push_back(std::to_string(outside) + " pixels lie outside the mask");
  }
  input.pixels = std::move(field.pixels);
  input.grey = make_grey_levels(input.pixels.view());
  describe_grey(input.grey, record);
  input.options = map_options(field);
  input.measure.classes = settings.classes;
  input.measure.particles = settings.particles;
  if (input.options.pixel_size_um) input.measure.pixel_size_um = *input.options.pixel_size_um;
  return input;
}

}  // namespace stillfield
