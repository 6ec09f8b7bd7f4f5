// Looks into a drop folder: what is new, what waits, what is left alone.
#include <fcntl.h>
#include <sys/socket.h>
#include <sys/stat.h>
#include <sys/un.h>

#include <algorithm>
#include <random>

#include "edge/station/limits.hpp"
#include "edge/station/support.hpp"

using namespace antherd;
using namespace antherd::station;
namespace fs = std::filesystem;

namespace {

const Instant now = utc(2026, 6, 2);

/// A watcher as the service is one: keeps one bookmark for each device and inode.
class Watch {
 public:
  explicit Watch(const Folder& folder, RecordForm record = plain_form()) {
    form.folder = folder.path();
    form.record = std::move(record);
  }

  Look look() {
    Look look = look_into(form, marks, now);
    for (const Bookmark& changed : look.bookmarks) {
      const auto same = [&](const Bookmark& mark) {
        return mark.device == changed.device && mark.inode == changed.inode;
      };
      marks.erase(std::remove_if(marks.begin(), marks.end(), same), marks.end());
      marks.push_back(changed);
    }
    for (const auto& sample : look.readings.samples) samples.push_back(sample);
    for (const auto& row : look.readings.refused) refused.push_back(row);
    return look;
  }

  DropForm form;
  std::vector<Bookmark> marks;
  std::vector<weather::Sample> samples;
  std::vector<Refused> refused;
};

std::string row(int minute, int degrees = 20) {
  char text[120];
  std::snprintf(text, sizeof text, "2026-06-01 %02d:%02d,%d,40\n", 10 + minute / 60, minute % 60,
                degrees);
  return text;
}

const std::string header = "time,temp,rh\n";

}  // namespace

TEST_CASE("a file is read from where it ended last time") {
  const Folder folder;
  Watch watch(folder);
  folder.write("a.csv", header + row(0) + row(5));
  CHECK(watch.look().readings.samples.size() == 2);
  CHECK(watch.look().readings.samples.empty());
  CHECK(watch.look().bookmarks.empty());
  folder.append("a.csv", row(10));
  const Look look = watch.look();
  REQUIRE(look.readings.samples.size() == 1);
  CHECK(look.readings.samples[0].time == utc(2026, 6, 1, 10, 10));
  REQUIRE(look.bookmarks.size() == 1);
  CHECK(look.bookmarks[0].lines_read == 4);
  CHECK(look.bookmarks[0].path == "a.csv");
  CHECK_FALSE(look.more);
}

TEST_CASE("a half line waits for its rest") {
  const Folder folder;
  Watch watch(folder);
  folder.write("a.csv", "time,te");
  CHECK(watch.look().troubles.empty());
  folder.append("a.csv", "mp,rh\n2026-06-01 10:00,2");
  CHECK(watch.look().readings.samples.empty());
  folder.append("a.csv", "1.5,40");
  CHECK(watch.look().readings.samples.empty());
  folder.append("a.csv", "\n");
  CHECK(watch.look().readings.samples.at(0).temperature == Celsius{21.5});
  CHECK(watch.refused.empty());
}

TEST_CASE("refused rows bear their file and line, however the file came") {
  const Folder folder;
  Watch watch(folder);
  folder.write("a.csv", header + row(0) + "rubbish\n");
  watch.look();
  folder.append("a.csv", row(5) + "more rubbish\n");
  watch.look();
  REQUIRE(watch.refused.size() == 2);
  CHECK(watch.refused[0].file == folder / "a.csv");
  CHECK(watch.refused[0].line == 3);
  CHECK(watch.refused[1].line == 5);
  CHECK(watch.refused[1].text == "more rubbish");
}

TEST_CASE("a smaller file or another beginning is a new file") {
  const Folder folder;
  Watch watch(folder);
  folder.write("a.csv", header + row(0) + row(5) + row(10));
  watch.look();
  folder.write("a.csv", header + row(15));  // the same inode, shorter
  CHECK(watch.look().readings.samples.size() == 1);
  folder.write("a.csv", header + row(20) + row(25));  // longer, but another content
  CHECK(watch.look().readings.samples.size() == 2);
  folder.write("b.csv", header + row(30));
  fs::rename(folder / "b.csv", folder / "a.csv");  // replaced
  CHECK(watch.look().readings.samples.size() == 1);
}

TEST_CASE("a renamed file goes on where it was") {
  const Folder folder;
  Watch watch(folder);
  folder.write("today.csv", header + row(0));
  watch.look();
  fs::rename(folder / "today.csv", folder / "2026-06-01.csv");
  folder.append("2026-06-01.csv", row(5));
  folder.write("today.csv", header + row(10));
  const Look look = watch.look();
  CHECK(look.readings.samples.size() == 2);
  CHECK(look.troubles.empty());
}

TEST_CASE("only the names that the form wants, no hidden files, no folders below") {
  const Folder folder;
  Watch watch(folder);
  watch.form.files = "bench-*.csv";
  fs::create_directory(folder / "bench-old.csv");
  folder.write("bench-old.csv/bench-x.csv", header + row(0));
  folder.write("other-1.csv", header + row(0));
  folder.write("bench-2.csv", header + row(5));
  folder.write("bench-1.csv", header + row(10));
  folder.write(".bench-3.csv", header + row(15));
  const Look look = watch.look();
  REQUIRE(look.readings.samples.size() == 2);
  CHECK(look.readings.samples[0].time == utc(2026, 6, 1, 10, 10));  // sorted by name
  CHECK(look.troubles.empty());
  watch.form.files = "*";
  CHECK(watch.look().readings.samples.size() == 1);
}

TEST_CASE("links, pipes and sockets are left alone and named once") {
  const Folder folder;
  const Folder elsewhere;
  Watch watch(folder);
  elsewhere.write("secret.csv", header + row(0));
  fs::create_symlink(elsewhere / "secret.csv", folder / "link.csv");
  REQUIRE(mkfifo((folder / "pipe.csv").c_str(), 0600) == 0);
  const int listener = socket(AF_UNIX, SOCK_STREAM, 0);
  sockaddr_un address{};
  address.sun_family = AF_UNIX;
  const std::string path = folder / "s.csv";
  REQUIRE(path.size() < sizeof address.sun_path);
  std::copy(path.begin(), path.end(), address.sun_path);
  REQUIRE(bind(listener, reinterpret_cast<const sockaddr*>(&address), sizeof address) == 0);
  const Look look = watch.look();
  close(listener);
  CHECK(look.readings.samples.empty());
  REQUIRE(look.troubles.size() == 3);
  CHECK(says(look.troubles[0].sentence(), {"link.csv", "it is a link", "left alone"}));
  CHECK(says(look.troubles[1].sentence(), {"pipe.csv", "a pipe"}));
  CHECK(says(look.troubles[2].sentence(), {"s.csv", "a socket"}));
  CHECK(watch.look().troubles.empty());
}

TEST_CASE("a header that does not fit is named once and tried again") {
  const Folder folder;
  Watch watch(folder);
  folder.write("a.csv", "when,temp,rh\n" + row(0));
  folder.write("b.csv", std::string("\xFF\xFEt\0i\0\n\0", 8));
  folder.write("c.csv", header + row(5));
  const Look look = watch.look();
  CHECK(look.readings.samples.size() == 1);
  REQUIRE(look.troubles.size() == 2);
  CHECK(says(look.troubles[0].sentence(), {"a.csv", "'time'", "when, temp, rh"}));
  CHECK(says(look.troubles[1].sentence(), {"b.csv", "UTF-16"}));
  CHECK(watch.look().troubles.empty());
  folder.append("a.csv", row(10));
  CHECK(watch.look().troubles.empty());
  watch.form.record.time.at = {"when"};  // the settings were put right
  CHECK(watch.look().readings.samples.size() == 2);
}

TEST_CASE("a folder or file that cannot be read is a trouble, the others are read") {
  const Folder folder;
  Watch watch(folder);
  watch.form.folder = folder / "none";
  CHECK(says(watch.look().troubles.at(0).sentence(), {"drop folder", "none", "No such file"}));
  watch.form.folder = folder.path();
  folder.write("a\r\nb.csv", header + row(0) + "x\n");  // CR LF in a name
  watch.look();
  REQUIRE(watch.refused.size() == 1);
  CHECK(watch.refused[0].file == folder / "a\\x0d\\x0ab.csv");
  watch.form.record.rain = ValueForm{"rain", "furlong"};
  const Look look = watch.look();
  REQUIRE(look.troubles.size() == 1);
  CHECK(says(look.troubles[0].sentence(), {"furlong"}));
}

TEST_CASE("a big file comes in slices") {
  const Folder folder;
  Watch watch(folder);
  std::string text = header;
  int rows = 0;
  for (; text.size() < 5 * limits::bytes_per_file; ++rows) {
    text += row(rows % 600).substr(0, 16) + ",20.125,40.0625000000\n";
  }
  folder.write("a.csv", text);
  folder.write("b.csv", header + row(0));
  Look look = watch.look();
  CHECK(look.more);
  CHECK(look.readings.samples.size() < static_cast<std::size_t>(rows));
  CHECK(watch.samples.back().humidity == Percent{40});  // the small file did not wait for the big
  int looks = 1;
  while (look.more && looks < 50) {
    look = watch.look();
    ++looks;
  }
  CHECK(looks >= 5);
  CHECK(looks <= 7);
  CHECK(watch.samples.size() == static_cast<std::size_t>(rows) + 1);
  CHECK(watch.refused.empty());
}

TEST_CASE("a huge file of nothing is one refused row") {
  const Folder folder;
  Watch watch(folder);
  folder.write("a.csv", header + row(0));
  watch.look();
  fs::resize_file(folder / "a.csv", 9 * 1024 * 1024);  // sparse: NUL bytes without a line end
  Look look = watch.look();
  for (int i = 0; look.more && i < 20; ++i) look = watch.look();
  CHECK_FALSE(look.more);
  REQUIRE(watch.refused.size() == 1);
  CHECK(watch.refused[0].line == 3);
  CHECK(says(watch.refused[0].reason, {"64 KiB"}));
  folder.append("a.csv", "tail of it,1,2\n" + row(5));
  watch.look();
  CHECK(watch.refused.size() == 1);
  CHECK(watch.samples.size() == 2);
}

TEST_CASE("too many files: the last by name are looked at and that is said") {
  const Folder folder;
  Watch watch(folder);
  const std::size_t count = limits::files + 5;
  for (std::size_t i = 0; i < count; ++i) {
    char name[120];
    std::snprintf(name, sizeof name, "f%06zu.csv", i);
    const int file = open((folder / name).c_str(), O_CREAT | O_WRONLY | O_CLOEXEC, 0600);
    REQUIRE(file >= 0);
    close(file);
  }
  folder.write("f999999.csv", header + row(0));
  const Look look = watch.look();
  CHECK(look.readings.samples.size() == 1);
  REQUIRE(look.troubles.size() == 1);
  CHECK(says(look.troubles[0].sentence(), {"10000", "by name"}));
}

TEST_CASE("the repeated hour is told apart across looks") {
  const Folder folder;
  Watch watch(folder, local_form());
  const auto local = [](const char* clock) {
    return "2013-11-03 " + std::string(clock) + ",10,80\n";
  };
  folder.write("a.csv", header + local("00:00") + local("01:00"));
  watch.look();
  folder.append("a.csv", local("01:00"));
  watch.look();
  folder.append("a.csv", local("02:00"));
  watch.look();
  REQUIRE(watch.samples.size() == 4);
  CHECK(watch.samples[1].time == utc(2013, 11, 3, 5));
  CHECK(watch.samples[2].time == utc(2013, 11, 3, 6));
  CHECK(watch.samples[3].time == utc(2013, 11, 3, 7));
}

TEST_CASE("the same file whole or in pieces cut anywhere gives the same") {
  const unsigned seed = 20260601;
  INFO("seed " << seed);
  std::mt19937 random(seed);
  std::string text = "\xEF\xBB\xBFtime;temp;rh\r\n";
  for (const char* rest :
       {"00:30;10,5;80\r\n", "01:00;11;\"81\"\r\n", "01:30;11,5;82\r\n", "\r\n",
        "01:00;\"two\nlines\";83\r\n", "01:15;12;84\r\n", "01:30;\"never closed;5\r\n",
        "01:45;nonsense;85\r\n", "02:00;13;86\r\n", "time;temp;rh\r\n", "02:30;14;87\r\n"}) {
    text += (rest[0] == '0' ? "2013-11-03 " : "") + std::string(rest);
  }
  text += std::string(limits::line_bytes + 10, 'z') + "\n2013-11-03 03:00;15;88\n";
  const Readings whole = read_all(text, local_form());
  CHECK(whole.samples.size() == 7);
  CHECK(whole.refused.size() == 4);
  for (int round = 0; round < 24; ++round) {
    const Folder folder;
    Watch watch(folder, local_form());
    folder.write("a.csv", "");
    std::size_t at = 0;
    while (at < text.size()) {
      const bool crawl = at < 300 && round % 3 == 0;  // byte by byte, or at random points
      const std::size_t step = crawl ? 1 : random() % (at < 300 ? 40 : 40'000) + 1;
      folder.append("a.csv", text.substr(at, step));
      at += step;
      watch.look();
    }
    INFO("round " << round);
    CHECK(watch.samples == whole.samples);
    REQUIRE(watch.refused.size() == whole.refused.size());
    for (std::size_t i = 0; i < whole.refused.size(); ++i) {
      CHECK(watch.refused[i].line == whole.refused[i].line);
      CHECK(watch.refused[i].reason == whole.refused[i].reason);
      CHECK(watch.refused[i].text == whole.refused[i].text);
    }
  }
}

TEST_CASE("a look tells the names that are there, where it saw the whole folder") {
  const Folder folder;
  Watch watch(folder);
  watch.form.files = "*.csv";
  folder.write("b.csv", header + row(0));
  folder.write("a.csv", header + row(5));
  folder.write("a.txt", "not wanted");
  fs::create_hard_link(folder / "b.csv", folder / "c.csv");
  fs::create_directory(folder / "d.csv");
  const std::vector<std::string> there{"a.csv", "b.csv", "c.csv"};
  CHECK(watch.look().names == there);
  CHECK(watch.look().names == there);  // also of what is not read again
  fs::remove(folder / "a.csv");
  CHECK(watch.look().names == std::vector<std::string>{"b.csv", "c.csv"});
  for (std::size_t i = 0; i <= limits::files; ++i) folder.write(std::to_string(i) + ".csv", "");
  CHECK_FALSE(watch.look().names);
  watch.form.folder = folder / "none";
  CHECK_FALSE(watch.look().names);
}
