// OME-XML as the specification has it, as older and careless writers have it, and as nobody should.
//
// Documents are written by hand from the OME-TIFF specification (attributes of TiffData and their
// defaults) and the 2016-06 schema.
#include "image/ome.h"

#include <catch2/catch.hpp>
#include <functional>

#include "image/read.h"
#include "image/utf8.h"
#include "image/write.h"
#include "temp_folder.h"
#include "tiff_maker.h"

using namespace stillfield;
using namespace stillfield::test;
using Catch::Matchers::Contains;

namespace {

constexpr int kManyPages = 1000;

std::string ome(const std::string& pixels_attributes, const std::string& inside,
                const std::string& root_attributes = {}) {
  return "<?xml version=\"1.0\" encoding=\"UTF-8\"?>\n<!-- a comment -->\n"
         "<OME xmlns=\"http://www.openmicroscopy.org/Schemas/OME/2016-06\" " +
         root_attributes +
         "><Image ID=\"Image:0\" Name=\"field &lt;1&gt;\"><Pixels ID=\"Pixels:0\" " +
         pixels_attributes + ">" + inside + "</Pixels></Image></OME>";
}

const std::string kSizes =
    "DimensionOrder=\"XYCZT\" Type=\"uint16\" SizeX=\"6\" SizeY=\"5\" SizeZ=\"3\" SizeC=\"2\" "
    "SizeT=\"2\" ";
const std::string kChannels =
    "<Channel ID=\"Channel:0:0\" Name=\"nuclei\" SamplesPerPixel=\"1\"/>"
    "<Channel ID=\"Channel:0:1\" SamplesPerPixel=\"1\"/>";

std::string place_text(const OmePlane& p) {
  return std::to_string(p.page) + ":" + std::to_string(p.z) + std::to_string(p.c) +
         std::to_string(p.t);
}

std::string places(const OmeFile& file) {
  std::string text;
  for (const OmePlane& p : file.images.at(0).planes) text += place_text(p) + " ";
  return text;
}

OmeFile parse(const std::string& xml) {
  return parse_ome(xml, "a.ome.tif", kManyPages);
}

double x_um(const std::string& size_attributes) {
  return parse(ome(kSizes + size_attributes, kChannels)).images.at(0).voxel.x_um.value_or(-1);
}

}  // namespace

TEST_CASE("an empty TiffData means all planes in the order given") {
  const OmeFile file = parse(ome(kSizes, kChannels + "<TiffData/>"));
  REQUIRE(file.images.size() == 1);
  const OmeImage& image = file.images[0];
  CHECK(image.name == "field <1>");
  CHECK(image.depth == 3);
  CHECK(image.channels == 2);
  CHECK(image.times == 2);
  CHECK(image.channel_names == std::vector<std::string>{"nuclei", ""});
  CHECK(places(file) ==
        "0:000 1:010 2:100 3:110 4:200 5:210 6:001 7:011 8:101 9:111 10:201 11:211 ");
  CHECK(describe(*page_of(file, 8)) == "z 2 of 3, channel 1 of 2 (nuclei), time 2 of 2");
  CHECK_FALSE(page_of(file, 12));
  CHECK(file.notes.empty());
}

TEST_CASE("TiffData says where planes lie, and which lie in other files") {
  const std::string own = "UUID=\"urn:uuid:11\"";
  CHECK(places(parse(ome(kSizes,
                         "<TiffData IFD=\"4\" FirstZ=\"2\" FirstC=\"1\" FirstT=\"1\"/>"
                         "<TiffData FirstT=\"1\" IFD=\"1\" PlaneCount=\"2\"/>"))) ==
        "1:001 2:011 4:211 ");
  const std::string uuids =
      "<TiffData FirstZ=\"0\"><UUID FileName=\"b.ome.tif\">urn:uuid:22</UUID></TiffData>"
      "<TiffData FirstZ=\"1\" PlaneCount=\"1\"><UUID FileName=\"a.ome.tif\">urn:uuid:11</UUID>"
      "</TiffData>";
  CHECK(places(parse(ome(kSizes, uuids, own))) == "0:100 ");
  CHECK(places(parse(ome(kSizes, uuids))) == "0:100 ");
  const OmeFile outside = parse(ome(kSizes, "<TiffData IFD=\"0\" FirstZ=\"3\"/>"));
  CHECK(places(outside).empty());
  CHECK_THAT(outside.notes.at(0), Contains("planes outside"));
}

TEST_CASE("a page of red, green and blue is one channel of three samples") {
  const std::string colour =
      "DimensionOrder=\"XYCZT\" SizeX=\"6\" SizeY=\"5\" SizeZ=\"2\" "
      "SizeC=\"3\" SizeT=\"1\"";
  for (const char* samples : {"SamplesPerPixel=\"3\"", ""}) {
    const OmeFile file =
        parse(ome(colour, "<Channel ID=\"Channel:0:0\" " + std::string(samples) + "/><TiffData/>"));
    CHECK(file.images.at(0).channels == 1);
    CHECK(file.images.at(0).samples == 3);
    CHECK(places(file) == "0:000 1:100 ");
  }
}

TEST_CASE("physical sizes in every unit that is a length") {
  CHECK(x_um("PhysicalSizeX=\"0.325\"") == 0.325);
  CHECK(x_um("PhysicalSizeX=\"325\" PhysicalSizeXUnit=\"nm\"") == Approx(0.325).epsilon(1e-15));
  CHECK(x_um("PhysicalSizeX=\"3.25e-4\" PhysicalSizeXUnit=\"mm\"") == Approx(0.325).epsilon(1e-15));
  CHECK(x_um("PhysicalSizeX=\"0.5\" PhysicalSizeXUnit=\"&#181;m\"") == 0.5);
  CHECK(x_um("PhysicalSizeX=\"0.5\" PhysicalSizeXUnit=\"\xce\xbcm\"") == 0.5);
  CHECK(x_um("PhysicalSizeX=\"3250\" PhysicalSizeXUnit=\"\xc3\x85\"") == Approx(0.325));
  CHECK(x_um("PhysicalSizeX=\"0.001\" PhysicalSizeXUnit=\"in\"") == Approx(25.4));
  for (const char* no_length :
       {"PhysicalSizeX=\"1\" PhysicalSizeXUnit=\"pixel\"", "PhysicalSizeX=\"-1\"",
        "PhysicalSizeX=\"0\"", "PhysicalSizeX=\"nan\"", "PhysicalSizeX=\"1e999\"",
        "PhysicalSizeX=\"1,5\""}) {
    CAPTURE(no_length);
    const OmeFile file = parse(ome(kSizes + no_length, kChannels));
    CHECK_FALSE(file.images.at(0).voxel.x_um);
    CHECK(file.notes.size() == 1);
  }
}

TEST_CASE("damaged and hostile documents are notes, not errors, and stay small") {
  CHECK_THAT(parse("<OME><Image></OME>").notes.at(0), Contains("damaged"));
  CHECK_THAT(parse("<OME><BinaryOnly MetadataFile=\"x\" UUID=\"y\"/></OME>").notes.at(0),
             Contains("another file"));
  CHECK(parse(ome("SizeX=\"6\" SizeY=\"5\"", "")).images.empty());
  std::string deep = "<OME>";
  for (int i = 0; i < 200000; ++i) deep += "<a>";
  CHECK_THAT(parse(deep).notes.at(0), Contains("damaged"));

  std::string bomb = "<!DOCTYPE OME [<!ENTITY a \"aaaaaaaaaa\">";
  for (char c = 'b'; c <= 'p'; ++c) {
    const std::string previous = std::string("&") + static_cast<char>(c - 1) + ";";
    bomb += std::string("<!ENTITY ") + c + " \"";
    for (int i = 0; i < 10; ++i) bomb += previous;
    bomb += "\">";
  }
  bomb += "<!ENTITY file SYSTEM \"file:///etc/hostname\">]>";
  const OmeFile file =
      parse(bomb + "<OME><Image Name=\"&p;&file;\"><Pixels " + kSizes + "/></Image></OME>");
  CHECK(file.images.at(0).name == "&p;&file;");

  const std::string many =
      "DimensionOrder=\"XYZCT\" SizeX=\"1073741824\" SizeY=\"1073741824\" "
      "SizeZ=\"1073741824\" SizeC=\"1073741824\" SizeT=\"1073741824\"";
  std::string data;
  for (int i = 0; i < 3000; ++i) data += "<TiffData/>";
  CHECK(parse(ome(many, data)).images.at(0).planes.size() == kManyPages);
  CHECK(parse(ome(many,
                  "<TiffData IFD=\"1073741824\" PlaneCount=\"1073741824\" "
                  "FirstT=\"1073741823\" FirstC=\"1073741823\" FirstZ=\"1073741823\"/>"))
            .images.at(0)
            .planes.empty());
}

TEST_CASE("texts of a file become printable UTF-8") {
  CHECK(printable_utf8("a\tb\x01\x7f") == "a b  ");
  CHECK(printable_utf8("\xc2\xb5m \xe2\x82\xac \xf0\x9f\x94\xac") ==
        "\xc2\xb5m \xe2\x82\xac \xf0\x9f\x94\xac");
  // Overlong, surrogate, cut, stray, beyond U+10FFFF, a C1 control.
  CHECK(printable_utf8("\xc0\xaf|\xed\xa0\x80|\xe2\x82|\xff|\xf4\x90\x80\x80|\xc2\x85") ==
        "??|???|??|?|????|??");
  CHECK(printable_utf8(std::string(500, 'x')).size() == 200);
}

TEST_CASE("what is written is what is read: sizes, names, places, physical sizes") {
  const TempFolder folder;
  Volume<std::uint16_t> volume({6, 5, 3});
  const std::vector<TiffPage<std::uint16_t>> pages = {{volume.view(), "class 1 <&\">"},
                                                      {volume.view(), "\xc2\xb5"}};
  TiffOptions options;
  options.ome = OmeOutput{"heat 1", "grey", {0.1, 0.2, 1.5}};
  write_tiff(folder / "a.tif", pages, options);
  const auto images = read_ome(folder / "a.tif");
  REQUIRE(images.size() == 1);
  CHECK(images[0].name == "heat 1");
  CHECK(images[0].width == 6);
  CHECK(images[0].height == 5);
  CHECK(images[0].channel_names == std::vector<std::string>{"class 1 <&\">", "\xc2\xb5"});
  CHECK(images[0].voxel.x_um == 0.1);
  CHECK(images[0].voxel.y_um == 0.2);
  CHECK(images[0].voxel.z_um == 1.5);
  std::string text;
  for (const OmePlane& p : images[0].planes) text += place_text(p) + " ";
  CHECK(text == "0:000 1:100 2:200 3:010 4:110 5:210 ");
  const Field field = read_page(folder / "a.tif", 4);
  CHECK_FALSE(field.pixel_size_um);  // not square
  CHECK_THAT(field.notes.at(0), Contains("not square (0.1 x 0.2 um)"));
  CHECK(describe(*field.ome) == "z 2 of 3, channel 2 of 2 (\xc2\xb5), time 1 of 1");

  options.ome->axis = PageAxis::kTimes;
  write_tiff(folder / "b.tif", pages, options);
  CHECK(read_ome(folder / "b.tif").at(0).times == 2);
  CHECK(describe(*read_page(folder / "b.tif", 3).ome) ==
        "z 1 of 3, channel 1 of 1 (grey), time 2 of 2");
}

TEST_CASE("OME sizes come before resolution tags, and directories that are no pages do not count") {
  const TempFolder folder;
  TIFF* tiff = TIFFOpen((folder / "a.tif").c_str(), "w");
  const std::string xml =
      ome("DimensionOrder=\"XYZCT\" SizeX=\"50\" SizeY=\"37\" SizeZ=\"2\" SizeC=\"1\" SizeT=\"1\" "
          "PhysicalSizeX=\"0.5\" PhysicalSizeY=\"0.5\"",
          "<TiffData IFD=\"0\" PlaneCount=\"1\"/><TiffData IFD=\"2\" FirstZ=\"1\"/>");
  for (const std::uint32_t kind : {0, FILETYPE_REDUCEDIMAGE, 0}) {
    TIFFSetField(tiff, TIFFTAG_SUBFILETYPE, kind);
    TIFFSetField(tiff, TIFFTAG_IMAGEDESCRIPTION, xml.c_str());
    TIFFSetField(tiff, TIFFTAG_XRESOLUTION, 300.0);
    TIFFSetField(tiff, TIFFTAG_YRESOLUTION, 300.0);
    add_page<std::uint8_t>(tiff, {}, SAMPLEFORMAT_UINT,
                           [](int, int, int) { return std::uint8_t{1}; });
  }
  TIFFClose(tiff);
  const Field field = read_page(folder / "a.tif", 1);
  CHECK(field.pixel_size_um == 0.5);
  CHECK(field.pixel_size_source == PixelSizeSource::kOme);
  CHECK(describe(*field.ome) == "z 2 of 2, channel 1 of 1, time 1 of 1");
  CHECK(read_ome(folder / "a.tif").at(0).planes.at(1).page == 1);
  CHECK_THAT(sentence_of(ErrorKind::kInput,
                         [&] {
                           count_pages(folder / "a.tif", {1 << 20, 2});
                         }),
             Contains("more than the limit of 2 pages"));
}
