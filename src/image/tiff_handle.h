// An open TIFF file whose complaints are kept here instead of going to the terminal.
#ifndef STILLFIELD_IMAGE_TIFF_HANDLE_H_
#define STILLFIELD_IMAGE_TIFF_HANDLE_H_

#include <tiffio.h>

#include <filesystem>
#include <memory>
#include <string>

namespace stillfield {

class TiffHandle {
 public:
  // Throws Error(kInput) if the file is missing, empty, or has no valid first directory.
  static TiffHandle open(const std::filesystem::path& file);

  // Writes to `descriptor`, which stays with the caller; `big` asks for BigTIFF. Little-endian.
  static TiffHandle create(int descriptor, const std::filesystem::path& file, bool big);

  TIFF* get() const { return tiff_.get(); }

  // First complaint since forget_messages(); empty if there was none.
  const std::string& first_error() const { return messages_->error; }
  const std::string& first_warning() const { return messages_->warning; }
  void forget_messages() { *messages_ = {}; }

  // Flushes and closes; call first_error() afterwards.
  void close() { tiff_.reset(); }

 private:
  struct Messages {
    std::string error;
    std::string warning;
  };
  struct Close {
    void operator()(TIFF* tiff) const { TIFFClose(tiff); }
  };
  struct FreeOptions {
    void operator()(TIFFOpenOptions* options) const { TIFFOpenOptionsFree(options); }
  };

  TiffHandle() : messages_(std::make_unique<Messages>()) {}
  std::unique_ptr<TIFFOpenOptions, FreeOptions> options() const;
  static int keep(TIFF* tiff, void* message, const char* module, const char* format,
                  va_list arguments);

  std::unique_ptr<Messages> messages_;  // outlives tiff_: closing may complain
  std::unique_ptr<TIFF, Close> tiff_;
};

}  // namespace stillfield

#endif  // STILLFIELD_IMAGE_TIFF_HANDLE_H_
