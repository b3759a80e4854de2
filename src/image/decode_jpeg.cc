#include "image/decode_jpeg.h"

#include <csetjmp>
#include <cstdio>  // jpeglib.h needs size_t and FILE

// The order matters: jerror.h adds to jpeglib.h.
#include <jpeglib.h>

#include <jerror.h>

#include "image/input_checks.h"

namespace stillfield {
namespace {

// A few bytes too many before a marker are padding that some cameras write; more of them after the
// start of a scan are coded data that the decoder lost the thread of. Common practice, no source.
constexpr int kMostPadding = 16;

// Whether pixels are made up after this warning.
bool spoils_pixels(j_common_ptr info) {
  switch (info->err->msg_code) {
    case JWRN_ARITH_BAD_CODE:
    case JWRN_BOGUS_PROGRESSION:
    case JWRN_HIT_MARKER:
    case JWRN_HUFF_BAD_CODE:
    case JWRN_JPEG_EOF:
    case JWRN_MUST_RESYNC:
      return true;
    case JWRN_EXTRANEOUS_DATA:
      return reinterpret_cast<j_decompress_ptr>(info)->input_scan_number > 0 &&
             info->err->msg_parm.i[0] > kMostPadding;
    default:
      return false;
  }
}

// libjpeg reports by these functions and leaves by a jump, over frames without destructors only.
struct Complaints {
  jpeg_error_mgr base;  // first: libjpeg hands out its address
  std::jmp_buf back;
  bool spoilt;
  char first[JMSG_LENGTH_MAX];

  static Complaints& of(j_common_ptr info) { return *reinterpret_cast<Complaints*>(info->err); }

  static void keep(j_common_ptr info) {
    Complaints& self = of(info);
    if (self.first[0] == '\0' || self.spoilt) (*info->err->format_message)(info, self.first);
  }
  static void leave(j_common_ptr info) {
    of(info).spoilt = true;
    keep(info);
    std::longjmp(of(info).back, 1);
  }
  static void warn(j_common_ptr info, int level) {
    if (level >= 0) return;  // tracing
    if (of(info).spoilt) return;
    of(info).spoilt = spoils_pixels(info);
    keep(info);
  }
  static void print_nothing(j_common_ptr) {}
};

class Decoder {
 public:
  Decoder() {
    info_.err = jpeg_std_error(&complaints_.base);
    complaints_.base.error_exit = &Complaints::leave;
    complaints_.base.emit_message = &Complaints::warn;
    complaints_.base.output_message = &Complaints::print_nothing;
  }
  ~Decoder() { jpeg_destroy_decompress(&info_); }
  Decoder(const Decoder&) = delete;
  Decoder& operator=(const Decoder&) = delete;

  // Whether `picture` was filled; rows lie `stride` bytes apart. No object with a destructor may
  // live here: a complaint jumps out.
  bool decode(Bytes bytes, const RasterHeader& header, std::uint8_t* picture, std::size_t stride) {
    if (setjmp(complaints_.back) != 0) return false;
    jpeg_create_decompress(&info_);
    jpeg_mem_src(&info_, reinterpret_cast<const unsigned char*>(bytes.data()),
                 static_cast<unsigned long>(bytes.size()));
    jpeg_read_header(&info_, TRUE);
    info_.out_color_space = header.channels == 1 ? JCS_GRAYSCALE : JCS_EXT_BGR;
    jpeg_start_decompress(&info_);
    if (info_.output_width != header.width || info_.output_height != header.height ||
        info_.output_components != header.channels) {
      return false;
    }
    while (info_.output_scanline < info_.output_height) {
      JSAMPROW row = picture + stride * info_.output_scanline;
      jpeg_read_scanlines(&info_, &row, 1);
    }
    jpeg_finish_decompress(&info_);
    return !complaints_.spoilt;
  }

  std::string complaint() const { return complaints_.first; }

 private:
  jpeg_decompress_struct info_ = {};
  Complaints complaints_ = {};
};

}  // namespace

cv::Mat decode_jpeg(const std::filesystem::path& file, Bytes bytes, const RasterHeader& header,
                    std::vector<std::string>& notes) {
  cv::Mat picture(static_cast<int>(header.height), static_cast<int>(header.width),
                  header.channels == 1 ? CV_8UC1 : CV_8UC3);
  Decoder decoder;
  if (!decoder.decode(bytes, header, picture.data, picture.step[0])) {
    const std::string why = decoder.complaint();
    throw_input(file, "the JPEG data are damaged (" +
                          (why.empty() ? "not the size of the header" : why) + ")" + kCopyAgain);
  }
  if (!decoder.complaint().empty())
    notes.push_back("the JPEG decoder warns: " + decoder.complaint());
  return picture;
}

}  // namespace stillfield
