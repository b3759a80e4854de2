// PNG, BMP and PNM through OpenCV's decoders, JPEG through libjpeg, from memory.
#ifndef STILLFIELD_IMAGE_READ_OPENCV_H_
#define STILLFIELD_IMAGE_READ_OPENCV_H_

#include "image/file_type.h"
#include "image/read.h"

namespace stillfield {

Field read_opencv(const std::filesystem::path& file, FileType type, const ReadLimits& limits,
                  ColourMode colour);

}  // namespace stillfield

#endif  // STILLFIELD_IMAGE_READ_OPENCV_H_
