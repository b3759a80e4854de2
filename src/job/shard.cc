#include "job/shard.h"

#include <charconv>
#include <cstdint>
#include <span>
#include <string_view>

#include "core/utf8.h"
#include "image/digest.h"

namespace stillfield {
namespace {

constexpr std::string_view kBefore = "shard-";
constexpr std::string_view kBetween = "-of-";
constexpr std::string_view kAfter = ".json";

// A number from 1 to kMostShards without leading zeros or signs; 0 for anything else.
int part_number(std::string_view text) {
  int value = 0;
  const auto [end, error] = std::from_chars(text.data(), text.data() + text.size(), value);
  const bool whole = error == std::errc{} && end == text.data() + text.size();
  return whole && value >= 1 && value <= kMostShards && text.front() != '0' ? value : 0;
}

std::optional<Shard> shard_of(std::string_view number, std::string_view of) {
  const Shard shard{part_number(number), part_number(of)};
  return shard.number >= 1 && shard.number <= shard.of ? std::optional(shard) : std::nullopt;
}

}  // namespace

std::optional<Shard> parse_shard(const std::string& text) {
  const std::size_t slash = text.find('/');
  if (slash == std::string::npos) return std::nullopt;
  return shard_of(std::string_view(text).substr(0, slash),
                  std::string_view(text).substr(slash + 1));
}

bool is_in_shard(const Shard& shard, const std::filesystem::path& relative) {
  const std::string name = utf8_name(relative.generic_string());
  const std::string digest = sha256_hex(std::as_bytes(std::span(name))).substr(0, 15);
  std::uint64_t value = 0;
  std::from_chars(digest.data(), digest.data() + digest.size(), value, 16);
  return value % static_cast<std::uint64_t>(shard.of) ==
         static_cast<std::uint64_t>(shard.number - 1);
}

std::string shard_file(const Shard& shard) {
  std::string name(kBefore);
  name.append(std::to_string(shard.number)).append(kBetween);
  return name.append(std::to_string(shard.of)).append(kAfter);
}

std::optional<Shard> shard_of_file(const std::string& name) {
  std::string_view rest = name;
  if (!rest.starts_with(kBefore) || !rest.ends_with(kAfter)) return std::nullopt;
  if (rest.size() < kBefore.size() + kAfter.size()) return std::nullopt;
  rest.remove_prefix(kBefore.size());
  rest.remove_suffix(kAfter.size());
  const std::size_t between = rest.find(kBetween);
  if (between == std::string_view::npos) return std::nullopt;
  return shard_of(rest.substr(0, between), rest.substr(between + kBetween.size()));
}

}  // namespace stillfield
