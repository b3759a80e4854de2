// Known answers: NIST, "Examples with intermediate values", SHA-256, and FIPS 180-2 appendix B
// (one million times "a").
#include "image/digest.h"

#include <catch2/catch.hpp>

#include "temp_folder.h"

using namespace stillfield;
using namespace stillfield::test;

namespace {
std::string sha(const std::string& text) {
  return sha256_hex(std::as_bytes(std::span(text)));
}
}  // namespace

TEST_CASE("SHA-256 known answers") {
  CHECK(sha("") == "e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855");
  CHECK(sha("abc") == "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad");
  CHECK(sha("abcdbcdecdefdefgefghfghighijhijkijkljklmklmnlmnomnopnopq") ==
        "248d6a61d20638b8e5c026930c3e6039a33ce45964ff2167f6ecedd419db06c1");
}

TEST_CASE("SHA-256 of a file is that of its bytes, also across the read buffer") {
  const TempFolder folder;
  put(folder / "million", std::string(1000000, 'a'));
  CHECK(sha256_of_file(folder / "million") ==
        "cdc76e5c9914fb9281a1c7e284d73e67f1809a48a497200e046d39ccc7112cd0");
  const std::string large((3u << 20) + 5, 'x');
  put(folder / "large", large);
  CHECK(sha256_of_file(folder / "large") == sha(large));
  CHECK_THROWS_AS(sha256_of_file(folder / "missing"), Error);
}
