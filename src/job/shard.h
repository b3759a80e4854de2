// A part of a run: `--shard 2/5` does the second of five parts of the images.
//
// Split    by the SHA-256 of the image's name in the tables, so that an image stays in its part
//          when files come or go, also while other parts are at work, and every machine agrees
//          without asking; the price is parts of unequal size (binomial)
#ifndef STILLFIELD_JOB_SHARD_H_
#define STILLFIELD_JOB_SHARD_H_

#include <filesystem>
#include <optional>
#include <string>

namespace stillfield {

struct Shard {
  int number = 1;  // 1..of
  int of = 1;

  bool operator==(const Shard&) const = default;
};

inline constexpr int kMostShards = 10000;

// "2/5"; empty for anything else.
std::optional<Shard> parse_shard(const std::string& text);

bool is_in_shard(const Shard& shard, const std::filesystem::path& relative);

// "shard-2-of-5.json", the run file of a shard; and back.
std::string shard_file(const Shard& shard);
std::optional<Shard> shard_of_file(const std::string& name);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_SHARD_H_
