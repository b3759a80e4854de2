// Groups of fields: by folder, and by a table with its mistakes.
#include "report/field_groups.h"

#include <catch2/catch.hpp>
#include <fstream>

#include "core/error.h"
#include "image/temp_folder.h"
#include "report/csv_read.h"

using namespace stillfield;
using namespace stillfield::test;
using Catch::Contains;

namespace {

const std::vector<std::string> kImages = {"a/1.tif", "a/2.tif", "b/1.tif", "top.tif"};

FieldGroups groups_from(const std::string& text, const std::string& column = "group") {
  const TempFolder folder;
  const auto file = folder.path() / "groups.csv";
  std::ofstream(file, std::ios::binary) << text;
  return read_groups(file, column, kImages);
}

}  // namespace

TEST_CASE("folders are the groups") {
  CHECK(folder_group("a/1.tif") == "a");
  CHECK(folder_group("a/b/1.tif") == "a/b");
  CHECK(folder_group("top.tif") == ".");
}

TEST_CASE("a table gives the groups, by path or by a file name that is the only one") {
  const FieldGroups groups =
      groups_from("\xEF\xBB\xBFimage,heat,group\r\na/1.tif,7,\"x, y\"\r\n2.tif,8,z\r\n\r\n");
  CHECK(groups.at("a/1.tif") == "x, y");
  CHECK(groups.at("a/2.tif") == "z");
  CHECK(groups.at("b/1.tif").empty());  // left out
  CHECK(groups.at("top.tif").empty());
  CHECK(groups_from("heat,image\n7,top.tif\n", "heat").at("top.tif") == "7");
}

TEST_CASE("a table with a mistake is refused in one sentence") {
  CHECK_THROWS_WITH(groups_from("image,group\na/1.tif,x\na/9.tif,x\n"),
                    Contains("groups.csv: line 3: names `a/9.tif`, which is not among the images"));
  CHECK_THROWS_WITH(groups_from("image,group\n2.tif,x\na/2.tif,y\n"),
                    Contains("line 3: names a/2.tif a second time"));
  CHECK_THROWS_WITH(groups_from("image,group\n1.tif,x\n"),
                    Contains("line 2: `1.tif` may be a/1.tif or b/1.tif"));
  CHECK_THROWS_WITH(groups_from("image;group\ntop.tif;x\n"), Contains("has no column `image`"));
  CHECK_THROWS_WITH(groups_from("image,group\n", "heat"), Contains("has no column `heat`"));
  CHECK_THROWS_WITH(groups_from("image,group\ntop.tif\n"), Contains("line 2: has fewer fields"));
  CHECK_THROWS_WITH(groups_from("image,group\ntop.tif,(all)\n"), Contains("must not be called"));
  CHECK_THROWS_WITH(groups_from("image,group\n\"top.tif,x\n"),
                    Contains("line 2: a quoted field does not end"));
  CHECK_THROWS_WITH(groups_from("\n\n"), Contains("holds no line"));
  CHECK_THROWS_AS(read_groups("no-such-file.csv", "group", kImages), Error);
}

TEST_CASE("separated values read by RFC 4180") {
  const std::vector<CsvRow> rows = parse_csv("a,\"b \"\"c\"\"\",\n\"two\nlines\",,d\n\"\"\n");
  REQUIRE(rows.size() == 3);
  CHECK(rows[0].fields == std::vector<std::string>{"a", "b \"c\"", ""});
  CHECK(rows[1].fields == std::vector<std::string>{"two\nlines", "", "d"});
  CHECK(rows[2].line == 4);
  CHECK(rows[2].fields == std::vector<std::string>{""});
  CHECK(parse_csv("").empty());
  CHECK_THROWS_AS(parse_csv("a\"b"), Error);
  CHECK_THROWS_AS(parse_csv("\"a\"b"), Error);
}
