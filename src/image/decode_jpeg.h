// JPEG through libjpeg, whose complaints OpenCV's decoder would send to the terminal while it hands
// out what it made of damaged data.
#ifndef STILLFIELD_IMAGE_DECODE_JPEG_H_
#define STILLFIELD_IMAGE_DECODE_JPEG_H_

#include <filesystem>
#include <opencv2/core.hpp>
#include <string>
#include <vector>

#include "image/raster_header.h"

namespace stillfield {

// The picture as 8-bit grey, or blue, green, red, as `header` (of check_jpeg) has channels; rows as
// stored, whatever an orientation tag says. Complaints that leave the pixels in order become notes.
// Throws Error(kInput) if the coded data are damaged, or the picture is not what its header claims.
cv::Mat decode_jpeg(const std::filesystem::path& file, Bytes bytes, const RasterHeader& header,
                    std::vector<std::string>& notes);

}  // namespace stillfield

#endif  // STILLFIELD_IMAGE_DECODE_JPEG_H_
