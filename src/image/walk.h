// Which files to work on, and what their results are called.
//
// Folders  are walked recursively in byte order of the path, whatever the locale; hidden files and
//          folders and the output folder are left out; links to folders are followed unless they
//          lead back to a folder around them; a file reached twice counts once, where first met.
//          A folder below an input that cannot be listed stands in the list, with a sentence
// Files    named directly are taken whatever their name (the content decides, see read.h)
// Mirror   results of DIR/a/b.tif go to OUT/a/b.*; with several folders to OUT/DIR/a/b.*, and a
//          second folder of the same name becomes DIR-2, and so on; files named directly go to OUT
// Clashes  b.png and b.tif in one folder would both write b.*: all files of such a group keep their
//          extension (b.png.*, b.tif.*); what still clashes gets -2, -3, ... in the order found.
//          b.page001.tif beside b.tif counts as a clash, because page 1 of b.tif may need that name
#ifndef STILLFIELD_IMAGE_WALK_H_
#define STILLFIELD_IMAGE_WALK_H_

#include <filesystem>
#include <string>
#include <vector>

namespace stillfield {

struct InputFile {
  std::filesystem::path path;      // opens the file
  std::filesystem::path relative;  // mirrored place, with the file's own name
  std::filesystem::path output;    // mirrored place and NAME, unique among the inputs
  int input = 0;                   // which of the inputs it was found in, from 0
  std::string failure;             // of a folder that cannot be listed; empty otherwise

  bool operator==(const InputFile&) const = default;
};

// Throws Error(kInput) if an input is missing, cannot be listed or holds no images, and
// Error(kUsage) if a folder is the output folder itself. An empty output folder excludes nothing.
std::vector<InputFile> find_inputs(const std::vector<std::filesystem::path>& inputs,
                                   const std::filesystem::path& output_folder);

// The same for jobs that need every file: a folder that cannot be listed throws Error(kInput).
std::vector<InputFile> find_all_inputs(const std::vector<std::filesystem::path>& inputs);

// NAME of `NAME.labels.tif`, relative to the output folder: file.output, and for a file of several
// pages ".page001", ".page002", ... after it (page counts from 0 as in read.h).
std::filesystem::path output_stem(const InputFile& file, int page = 0, int pages = 1);

// Whether the name ends in .png .jpg .jpeg .bmp .pgm .ppm .pnm .pbm .tif .tiff, in any case.
bool has_image_extension(const std::filesystem::path& path);

}  // namespace stillfield

#endif  // STILLFIELD_IMAGE_WALK_H_
