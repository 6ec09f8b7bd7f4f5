// The page's HTML and style; see page.hpp. No scripts, nothing from elsewhere.
#include "edge/page/page.hpp"

namespace antherd::page {

namespace {

std::string escaped(const std::string& text) {
  std::string safe;
  for (const char letter : text) {
    switch (letter) {
      case '&':
        safe += "&amp;";
        break;
      case '<':
        safe += "&lt;";
        break;
      case '>':
        safe += "&gt;";
        break;
      case '"':
        safe += "&quot;";
        break;
      case '\0':
        break;
      default:
        safe += letter;
    }
  }
  return safe;
}

std::string section(const std::string& heading, const std::string& text) {
  if (text.empty()) return {};
  return "<section><h2>" + heading + "</h2>\n<pre>" + escaped(text) + "</pre></section>\n";
}

}  // namespace

const std::string& style_sheet() {
  static const std::string sheet =
      R"(:root { color-scheme: light dark; --paper: #fbfaf6; --card: #fff;
  --ink: #1f2933; --faint: #5b6770; --rule: #dfdccf; --warn: #8a1752; }
@media (prefers-color-scheme: dark) { :root { --paper: #161a1d; --card: #1f2529; --ink: #e8eaec;
  --faint: #a3adb5; --rule: #39424a; --warn: #ff9ecb; } }
* { box-sizing: border-box; }
body { margin: 0 auto; max-width: 52rem; padding: 1rem; background: var(--paper);
  color: var(--ink); font: 1rem/1.5 system-ui, sans-serif; }
header { display: flex; flex-wrap: wrap; gap: 0 1rem; align-items: baseline; }
h1 { font-size: 1.5rem; margin: 0; }
h2 { font-size: 1rem; margin: 0 0 .5rem; color: var(--faint); }
header p { margin: 0; color: var(--faint); }
section, footer { margin: 1rem 0; padding: 1rem; background: var(--card);
  border: 1px solid var(--rule); border-radius: .5rem; }
pre { margin: 0; white-space: pre-wrap; overflow-wrap: anywhere;
  font: clamp(.78rem, 2.6vw, .95rem)/1.45 ui-monospace, monospace; }
img { display: block; width: 100%; height: auto; background: #fff; border-radius: .25rem; }
img + img { margin-top: 1rem; }
.warning { color: var(--warn); font-weight: 600; border: 2px solid; border-radius: .5rem;
  padding: .75rem 1rem; }
footer { color: var(--faint); font-size: .9rem; white-space: pre-line; }
)";
  return sheet;
}

std::string html_of(const PageContent& content, bool stale) {
  std::string html =
      "<!DOCTYPE html>\n<html lang=\"en\"><head><meta charset=\"utf-8\">\n"
      "<meta name=\"viewport\" content=\"width=device-width, initial-scale=1\">\n"
      "<meta http-equiv=\"refresh\" content=\"60\">\n"
      "<link rel=\"stylesheet\" href=\"/style.css\">\n<title>";
  html += escaped(content.farm.empty() ? "antherd" : content.farm + " – antherd");
  html += "</title></head>\n<body><header><h1>" + escaped(content.farm) + "</h1>";
  if (!content.made.empty()) html += "<p>as of " + escaped(content.made) + "</p>";
  html += "</header>\n";
  if (stale) {
    html +=
        "<p class=\"warning\">The service has not renewed this page for a while: the watch itself "
        "may be down. What stands below may be old.</p>\n";
  }
  html += section("Now", content.now_text);
  if (!content.charts.empty()) {
    html += "<section><h2>Charts</h2>\n";
    for (std::size_t i = 0; i < content.charts.size(); ++i) {
      html += "<img src=\"/chart-" + std::to_string(i) + ".svg\" alt=\"" +
              escaped(content.charts[i].title) + "\">\n";
    }
    html += "</section>\n";
  }
  html += section("Weekly review", content.review_text);
  html += "<footer>" + escaped(content.caution) + "</footer>\n</body></html>\n";
  return html;
}

}  // namespace antherd::page
