// SHA-256 as 64 lower-case hexadecimal digits. Source: NIST FIPS 180-4.
#ifndef STILLFIELD_IMAGE_DIGEST_H_
#define STILLFIELD_IMAGE_DIGEST_H_

#include <cstddef>
#include <filesystem>
#include <span>
#include <string>

namespace stillfield {

std::string sha256_hex(std::span<const std::byte> bytes);

// Reads in pieces of 1 MiB. Throws Error(kInput) if the file is missing, empty or unreadable.
// Of a file; of a folder, over the names and contents of all its files; empty for an empty path or
// one where nothing is. Throws Error(kInput) for what cannot be read.
std::string sha256_of_tree(const std::filesystem::path& path);

std::string sha256_of_file(const std::filesystem::path& path);

}  // namespace stillfield

#endif  // STILLFIELD_IMAGE_DIGEST_H_
