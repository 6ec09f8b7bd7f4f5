// Sentences and transcripts that need no server.
#include "edge/mail/conversation.hpp"
#include "support/catch.hpp"

using namespace antherd;
using namespace antherd::mail;

namespace {

Server server() {
  Server settings;
  settings.url = "smtps://mail.larkspur.example:465";
  settings.user = "alerts@larkspur.example";
  settings.password = "s3cret";
  settings.from = "alerts@larkspur.example";
  return settings;
}

Spoken judged(Transport transport) {
  const Conversation talk(server());
  return judge(server(), "owner@larkspur.example", talk, transport, false);
}

}  // namespace

TEST_CASE("every end of a line that never spoke: how it counts, and one sentence") {
  const std::vector<std::pair<Transport, How>> ends{
      {Transport::no_name, How::wait},
      {Transport::no_connection, How::wait},
      {Transport::too_slow, How::wait},
      {Transport::lost, How::wait},
      {Transport::stopped, How::wait},
      {Transport::certificate_not_yet, How::wait},  // a clock that is not set mends itself
      {Transport::no_starttls, How::settings_trouble},
      {Transport::no_tls, How::settings_trouble},
      {Transport::unknown_authority, How::settings_trouble},
      {Transport::wrong_name, How::settings_trouble},
      {Transport::certificate_expired, How::settings_trouble},
      {Transport::bad_certificate_file, How::settings_trouble},
      {Transport::bad_login, How::settings_trouble},
      {Transport::bad_url, How::settings_trouble}};
  std::vector<std::string> sentences;
  for (const auto& [transport, how] : ends) {
    const Spoken spoken = judged(transport);
    INFO(spoken.sentence);
    CHECK(spoken.how == how);
    CHECK(spoken.about == About::server);
    CHECK(spoken.sentence.find("mail.larkspur.example:465") != std::string::npos);
    CHECK(spoken.sentence.find("owner@larkspur.example") != std::string::npos);
    for (const std::string& other : sentences) CHECK(other != spoken.sentence);
    sentences.push_back(spoken.sentence);
  }
}

TEST_CASE("a place is a host and its port") {
  CHECK(place_of("smtps://mail.larkspur.example:465") == "mail.larkspur.example:465");
  CHECK(place_of("smtps://mail.larkspur.example") == "mail.larkspur.example:465");
  CHECK(place_of("smtp://mail.larkspur.example:587") == "mail.larkspur.example:587");
}

TEST_CASE("answers of several lines become one") {
  Conversation talk(server());
  talk.said("AUTH PLAIN\r\n");
  talk.heard("535-5.7.8 Not accepted.\r\n");
  CHECK_FALSE(talk.answered());
  talk.heard("535 5.7.8 Ask the manager.\r\n");
  CHECK(talk.answered());
  CHECK(talk.code() == 535);
  CHECK(talk.answer() == "535-5.7.8 Not accepted. 5.7.8 Ask the manager.");
}

TEST_CASE("nothing of a login is written down, whatever its form") {
  Conversation talk(server());
  talk.said("AUTH PLAIN AGZhcm0AczNjcmV0\r\n");
  talk.heard("334 \r\n");
  talk.said("AGZhcm0AczNjcmV0\r\n");
  talk.said("s3cret\r\n");
  talk.heard("235 2.7.0 welcome, s3cret\r\n");
  talk.said("MAIL FROM:<alerts@larkspur.example>\r\n");
  CHECK(talk.logged_in());
  CHECK(talk.transcript() ==
        "> AUTH PLAIN (credentials)\n< 334\n> (credentials)\n> (credentials)\n"
        "< 235 2.7.0 welcome, ***\n> MAIL FROM:<alerts@larkspur.example>\n");
}

TEST_CASE("a server that talks without end fills neither memory nor sentence") {
  Conversation talk(server());
  for (int n = 0; n < 100000; ++n) talk.heard("550-" + std::string(500, 'x') + "\r\n");
  talk.heard("550 end\r\n");
  CHECK(talk.transcript().size() < 20'000);
  CHECK(talk.answer().size() < 310);
}
