#include "image/digest.h"

#include <openssl/evp.h>

#include <algorithm>
#include <memory>
#include <new>
#include <span>
#include <vector>

#include "image/file_bytes.h"

namespace stillfield {
namespace {

class Sha256 {
 public:
  Sha256() : context_(EVP_MD_CTX_new()) {
    if (!context_ || EVP_DigestInit_ex(context_.get(), EVP_sha256(), nullptr) != 1) {
      throw std::bad_alloc();
    }
  }

  void add(Bytes bytes) { EVP_DigestUpdate(context_.get(), bytes.data(), bytes.size()); }

  std::string hex() {
    unsigned char digest[EVP_MAX_MD_SIZE];
    unsigned size = 0;
    EVP_DigestFinal_ex(context_.get(), digest, &size);
    std::string text;
    for (unsigned i = 0; i < size; ++i) {
      text += "0123456789abcdef"[digest[i] >> 4];
      text += "0123456789abcdef"[digest[i] & 15];
    }
    return text;
  }

 private:
  struct Free {
    void operator()(EVP_MD_CTX* context) const { EVP_MD_CTX_free(context); }
  };
  std::unique_ptr<EVP_MD_CTX, Free> context_;
};

}  // namespace

std::string sha256_hex(std::span<const std::byte> bytes) {
  Sha256 sha;
  sha.add(bytes);
  return sha.hex();
}

std::string sha256_of_file(const std::filesystem::path& path) {
  InputHandle input(path);
  std::vector<std::byte> buffer(std::size_t{1} << 20);
  Sha256 sha;
  while (const std::size_t got = input.read(buffer)) sha.add(Bytes(buffer).first(got));
  return sha.hex();
}

std::string sha256_of_tree(const std::filesystem::path& path) {
  namespace fs = std::filesystem;
  if (fs::is_regular_file(path)) return sha256_of_file(path);
  if (!fs::is_directory(path)) return {};
  std::vector<fs::path> files;
  for (const auto& entry : fs::recursive_directory_iterator(path)) {
    if (entry.is_regular_file() && fs::file_size(entry.path()) > 0) files.push_back(entry.path());
  }
  std::sort(files.begin(), files.end());
  std::string list;
  for (const fs::path& file : files) {
    list += file.lexically_relative(path).generic_string() + '\0' + sha256_of_file(file) + '\n';
  }
  return sha256_hex(std::as_bytes(std::span(list)));
}

}  // namespace stillfield
