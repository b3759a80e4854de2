// OME-XML, the metadata of OME-TIFF: what the pages of a file are to each other, and how large.
//
// Source   Open Microscopy Environment, OME Data Model 2016-06 and the OME-TIFF specification
//          (Goldberg et al. 2005, Genome Biology 6:R47); older schemas with the same names are read
// Axes     z, channel, time, each from 0; a page whose pixels hold red, green and blue is one
// channel
//          of three samples, so `channels` counts pages, not samples
// Hostile  entities other than the five of XML are never expanded, no other file is opened, texts
//          and counts are limited; what is damaged is left out with a note, never an error: the
//          pixels can be read without it
#ifndef STILLFIELD_IMAGE_OME_H_
#define STILLFIELD_IMAGE_OME_H_

#include <optional>
#include <string>
#include <string_view>
#include <vector>

namespace stillfield {

// A page of the file and its place. `page` counts as read_page does; while parsing it is the number
// of the directory in the TIFF.
struct OmePlane {
  int page = 0;
  int z = 0;
  int c = 0;
  int t = 0;
};

// Sides of a voxel in micrometres, > 0, where the file says.
struct VoxelSize {
  std::optional<double> x_um;
  std::optional<double> y_um;
  std::optional<double> z_um;
};

struct OmeImage {
  std::string name;
  int width = 0;
  int height = 0;
  int depth = 1;
  int channels = 1;
  int times = 1;
  int samples = 1;              // of a channel: 3 where pixels hold red, green and blue
  std::string order = "XYZCT";  // which axis runs fastest over the pages; x and y come first
  VoxelSize voxel;
  std::vector<std::string> channel_names;  // one a channel, empty where it has none
  std::vector<OmePlane> planes;            // of this file, by page
};

struct OmeFile {
  std::vector<OmeImage> images;    // almost always one
  std::vector<std::string> notes;  // what was left out, and why
};

// Whether an ImageDescription is meant as OME-XML.
bool is_ome_xml(std::string_view description);

// `file_name` tells planes of this file from those of its companions; at most `max_planes` planes
// are kept.
OmeFile parse_ome(std::string_view xml, std::string_view file_name, int max_planes);

// One page as its file describes it.
struct OmePage {
  std::string image;
  std::string channel;
  OmePlane place;
  int depth = 1;
  int channels = 1;
  int times = 1;
  VoxelSize voxel;
};

// What is said about `page`, if anything.
std::optional<OmePage> page_of(const OmeFile& file, int page);

// For people, counting from 1: "z 3 of 12, channel 2 of 2 (nuclei), time 1 of 1".
std::string describe(const OmePage& page);

// What the pages of a file to be written are: channels or times outermost, z innermost.
enum class PageAxis { kChannels, kTimes };

struct OmeOutput {
  std::string image;
  std::string channel;  // of pages without a name of their own
  VoxelSize voxel;
  PageAxis axis = PageAxis::kChannels;
};

struct OmePixels {
  std::string type;  // of the schema: uint8, uint16, ..., float
  int width = 0;
  int height = 0;
  int depth = 1;                   // pages of one name
  int samples = 1;                 // of a pixel
  std::vector<std::string> pages;  // names along `axis`; empty where there is none
};

// An ImageDescription for the first page; no date, no random identifier.
std::string ome_xml(const OmeOutput& output, const OmePixels& pixels);

}  // namespace stillfield

#endif  // STILLFIELD_IMAGE_OME_H_
