#include "job/choose_classes.h"

#include <algorithm>
#include <limits>
#include <string>

#include "model/search_image.h"
#include "sampler/class_search.h"

namespace stillfield {
namespace {

// The best of the others, and how far the choice lies above it.
void describe_runner_up(const ClassSearch& search, ClassChoiceFacts& facts) {
  const auto score_of = [&](const TriedClasses& t) {
    return t.classes == search.choice ? -std::numeric_limits<double>::infinity() : t.score;
  };
  const auto second = std::max_element(
      search.tried.begin(), search.tried.end(),
      [&](const TriedClasses& a, const TriedClasses& b) { return score_of(a) < score_of(b); });
  if (second == search.tried.end() || second->classes == search.choice) return;
  facts.runner_up = second->classes;
  facts.margin = search.tried[static_cast<std::size_t>(search.choice - 1)].score - second->score;
}

}  // namespace

SegmentSettings with_chosen_classes(const GreyLevels& grey, const SegmentSettings& settings,
                                    std::uint64_t image_seed, const Pool& pool,
                                    ImageRecord& record) {
  SegmentSettings used = settings;
  ClassChoiceFacts& facts = record.class_choice;
  if (settings.classes != kAutoClasses) {
    facts.used = settings.classes;
    return used;
  }
  const GreyLevels small = make_search_image(grey);
  ClassSearch search;
  if (small.observed > 0) {
    search = search_classes(small, make_neighbourhood(settings.connectivity),
                            settings.shared_variance, kMostAutoClasses, image_seed, pool);
  }
  used.classes = std::max(2, search.choice);
  facts.used = used.classes;
  facts.best_explained_by = search.choice;
  for (const TriedClasses& t : search.tried) {
    facts.tried.push_back({t.classes, t.score, t.below_best, t.error});
  }
  describe_runner_up(search, facts);
  return used;
}

void add_choice_sentences(ImageRecord& record) {
  const ClassChoiceFacts& facts = record.class_choice;
  std::vector<std::string>& sentences = record.verdict.sentences;
  if (facts.best_explained_by == 1) {
    sentences.push_back("One class explains the image as well as any number up to " +
                        std::to_string(facts.tried.empty() ? 1 : facts.tried.back().classes) +
                        "; the two classes used may show nothing but noise.");
  } else if (facts.best_explained_by == kMostAutoClasses) {
    sentences.push_back("Of the numbers of classes tried the largest, " +
                        std::to_string(kMostAutoClasses) +
                        ", did best: there may be more, or uneven light or noise of another kind "
                        "asks for them; look at the labels and give --classes.");
  }
}

}  // namespace stillfield
