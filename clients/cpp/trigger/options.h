// Flags of the form --name value.
#pragma once

#include <cstdint>
#include <map>
#include <string>

namespace kinegate::trigger {

// Options are the flags of a program.
class Options {
 public:
  // known are the flags there are, with their defaults; --help is always one. Throws Error at any
  // other.
  Options(int argc, char** argv, std::map<std::string, std::string> known);

  // help says that --help was given, and usage is what it prints behind the program's own words.
  bool help() const { return help_; }
  std::string usage() const;

  // text returns a flag.
  const std::string& text(const std::string& name) const { return values_.at(name); }
  // number returns a flag that must be a number above 0 and at most a limit; whole one that must be
  // a whole number within limits. Both throw Error that names flag, value and limits.
  double number(const std::string& name, double most) const;
  std::int64_t whole(const std::string& name, std::int64_t least, std::int64_t most) const;

 private:
  std::map<std::string, std::string> values_, defaults_;
  bool help_ = false;
};

}  // namespace kinegate::trigger
