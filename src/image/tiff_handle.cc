#include "image/tiff_handle.h"

#include <unistd.h>

#include <cstdarg>
#include <cstdio>

#include "core/error.h"
#include "image/file_bytes.h"

namespace stillfield {

int TiffHandle::keep(TIFF*, void* message, const char*, const char* format, va_list arguments) {
  auto& kept = *static_cast<std::string*>(message);
  if (kept.empty()) {
    char text[512];
    std::vsnprintf(text, sizeof text, format, arguments);
    kept = text;
    while (!kept.empty() && (kept.back() == '.' || kept.back() == '\n')) kept.pop_back();
  }
  return 1;  // handled: libtiff's own handlers stay silent
}

std::unique_ptr<TIFFOpenOptions, TiffHandle::FreeOptions> TiffHandle::options() const {
  std::unique_ptr<TIFFOpenOptions, FreeOptions> options(TIFFOpenOptionsAlloc());
  TIFFOpenOptionsSetErrorHandlerExtR(options.get(), &keep, &messages_->error);
  TIFFOpenOptionsSetWarningHandlerExtR(options.get(), &keep, &messages_->warning);
  return options;
}

TiffHandle TiffHandle::open(const std::filesystem::path& file) {
  const InputHandle check(file);
  TiffHandle handle;
  // 'm': no memory map, so that a file shrinking on a network drive is an error, not a signal.
  handle.tiff_.reset(TIFFOpenExt(file.c_str(), "rm", handle.options().get()));
  if (!handle.tiff_) {
    throw_input(file,
                "the TIFF directory cannot be read (" + handle.first_error() + ")" + kCopyAgain);
  }
  return handle;
}

TiffHandle TiffHandle::create(int descriptor, const std::filesystem::path& file, bool big) {
  TiffHandle handle;
  const int own = ::dup(descriptor);  // libtiff closes the descriptor it is given
  if (own >= 0) {
    handle.tiff_.reset(
        TIFFFdOpenExt(own, file.c_str(), big ? "wl8" : "wl", handle.options().get()));
    if (!handle.tiff_) ::close(own);
  }
  if (!handle.tiff_) {
    throw Error(ErrorKind::kOutput, file.string() + ": the TIFF cannot be started (" +
                                        handle.first_error() + "); check the disk");
  }
  return handle;
}

}  // namespace stillfield
