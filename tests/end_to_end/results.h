// Looks at an output folder.
#ifndef STILLFIELD_TESTS_END_TO_END_RESULTS_H_
#define STILLFIELD_TESTS_END_TO_END_RESULTS_H_

#include <filesystem>
#include <map>
#include <nlohmann/json.hpp>
#include <string>
#include <vector>

namespace stillfield::test {

using Tree = std::map<std::string, std::string>;  // relative path -> content

inline const std::vector<std::string> kResultSuffixes = {".labels.tif",      ".labels.png",
                                                         ".probability.tif", ".entropy.tif",
                                                         ".particles.csv",   ".record.json"};

// Every file below `folder`, hidden ones too. Records come without their "run" object, the one
// place where equal runs may differ; run.json is left out.
Tree results_in(const std::filesystem::path& folder);

// Paths that are missing on one side or differ in content; empty when the trees are equal.
std::string differences(const Tree& a, const Tree& b);

// How many of the files of an image exist: 0 to kResultSuffixes.size().
std::size_t result_files(const std::filesystem::path& folder, const std::string& name);

nlohmann::ordered_json read_json(const std::filesystem::path& file);

// Paths of hidden files below `folder`: temporary files that should be gone.
std::vector<std::string> leftovers(const std::filesystem::path& folder);

}  // namespace stillfield::test

#endif  // STILLFIELD_TESTS_END_TO_END_RESULTS_H_
