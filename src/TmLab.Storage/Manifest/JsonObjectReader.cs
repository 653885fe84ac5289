using System.Globalization;
using System.Text.Json;
using TmLab.Measurement;

namespace TmLab.Storage.Manifest;

/// <summary>
/// Reads one JSON object strictly: each key is asked for by name and type, and whatever was never asked for is reported at the end.
/// Problems are collected, so that a reader gets something for every key and goes on.
/// </summary>
internal sealed class JsonObjectReader
{
    private readonly Dictionary<string, JsonElement> _members = new(StringComparer.Ordinal);
    private readonly List<string> _known = [];
    private readonly string _path;
    private readonly ProblemList _problems;

    /// <summary>Takes an object; <paramref name="path"/> is its JSON path, empty for the root.</summary>
    public JsonObjectReader(JsonElement element, string path, ProblemList problems)
    {
        _path = path;
        _problems = problems;
        foreach (JsonProperty member in element.EnumerateObject())
        {
            string name = NameOf(member);
            if (!_members.TryAdd(name, member.Value))
            {
                problems.Add(PathOf(name), "the key appears twice", "keep one of them");
            }
        }
    }

    /// <summary>The JSON path of a member.</summary>
    public string PathOf(string key) => _path.Length == 0 ? key : $"{_path}.{key}";

    /// <summary>Whether the key is there; asking does not make it known.</summary>
    public bool Has(string key) => _members.ContainsKey(key);

    /// <summary>A string, or null with a problem when it is absent or something else.</summary>
    public string? RequiredText(string key) => Require(key) ? Text(key) : null;

    /// <summary>A string; null when absent.</summary>
    public string? Text(string key) => TryTake(key, JsonValueKind.String, "a string", out JsonElement value) ? TextOf(value, PathOf(key)) : null;

    /// <summary>A number within (or, at <paramref name="includesMinimum"/>, on) its limits; null when absent.</summary>
    public double? Number(string key, double minimum, double maximum, bool includesMinimum = false)
    {
        if (!TryTake(key, JsonValueKind.Number, "a number", out JsonElement value))
        {
            return null;
        }

        double number = value.GetDouble();
        bool inside = number <= maximum && (number > minimum || (includesMinimum && number == minimum));
        if (!inside)
        {
            string limits = FormattableString.Invariant($"{(includesMinimum ? "at least" : "greater than")} {minimum} and at most {maximum}");
            _problems.Add(PathOf(key), $"{value.GetRawText()} is out of range", $"give a number {limits}");
        }

        return inside ? number : null;
    }

    /// <summary>A whole number within its limits, or null with a problem when it is absent or something else.</summary>
    public long? RequiredWhole(string key, long minimum, long maximum) => Require(key) ? Whole(key, minimum, maximum) : null;

    /// <summary>A whole number within its limits; null when absent.</summary>
    public long? Whole(string key, long minimum, long maximum) =>
        TryTake(key, JsonValueKind.Number, "a whole number", out JsonElement value) ? WholeOf(value, PathOf(key), minimum, maximum) : null;

    /// <summary>One of several words, or null with a problem.</summary>
    public T? RequiredChoice<T>(string key, IReadOnlyList<(string Word, T Value)> choices)
        where T : struct => Require(key) ? Choice(key, choices) : null;

    /// <summary>One of several words; null when absent.</summary>
    public T? Choice<T>(string key, IReadOnlyList<(string Word, T Value)> choices)
        where T : struct
    {
        if (Text(key) is not { } word)
        {
            return null;
        }

        foreach ((string known, T value) in choices)
        {
            if (known == word)
            {
                return value;
            }
        }

        IEnumerable<string> words = choices.Select(c => c.Word);
        _problems.Add(
            PathOf(key), $"\"{Shortened(word)}\" is not one of {string.Join(", ", words)}", $"did you mean \"{NearestName.Of(word, words)}\"?");
        return null;
    }

    /// <summary>An object, or null with a problem.</summary>
    public JsonObjectReader? RequiredObject(string key) => Require(key) ? Object(key) : null;

    /// <summary>An object; null when absent.</summary>
    public JsonObjectReader? Object(string key) =>
        TryTake(key, JsonValueKind.Object, "an object", out JsonElement value) ? new JsonObjectReader(value, PathOf(key), _problems) : null;

    /// <summary>A value of any kind, for keys that allow several; false with a problem when absent.</summary>
    public bool TryTakeRequired(string key, out JsonElement value)
    {
        value = default;
        if (!Require(key))
        {
            return false;
        }

        _known.Add(key);
        return _members.TryGetValue(key, out value);
    }

    /// <summary>An array of exactly <paramref name="length"/> whole numbers, or null with a problem.</summary>
    public long[]? RequiredWholes(string key, int length, long minimum, long maximum)
    {
        if (!Require(key) || !TryTake(key, JsonValueKind.Array, $"an array of {length} whole numbers", out JsonElement array))
        {
            return null;
        }

        if (array.GetArrayLength() != length)
        {
            _problems.Add(PathOf(key), $"the array has {array.GetArrayLength()} elements", $"give {length} whole numbers");
            return null;
        }

        long?[] found = [.. array.EnumerateArray().Select((e, i) => WholeOf(e, $"{PathOf(key)}[{i}]", minimum, maximum))];
        return Array.TrueForAll(found, f => f.HasValue) ? [.. found.Select(f => f!.Value)] : null;
    }

    /// <summary>Reports a key that has a meaning elsewhere but not here.</summary>
    public void Misplaced(string key, string reason)
    {
        _known.Add(key);
        if (_members.ContainsKey(key))
        {
            _problems.Add(PathOf(key), reason, "remove the key");
        }
    }

    /// <summary>Reports every key that was never asked for, with the nearest one that was.</summary>
    public void ReportUnknown()
    {
        foreach (string name in _members.Keys.Where(n => !_known.Contains(n)))
        {
            string? nearest = NearestName.Of(Shortened(name), _known);
            _problems.Add(PathOf(Shortened(name)), $"unknown key \"{Shortened(name)}\"", $"did you mean \"{nearest}\"?");
        }
    }

    /// <summary>The text of a string element; null with a problem when its escapes do not form text.</summary>
    public string? TextOf(JsonElement value, string path)
    {
        try
        {
            return value.GetString();
        }
        catch (InvalidOperationException)
        {
            // An escape such as \ud800 alone: valid JSON, but no text.
            _problems.Add(path, "the string holds an incomplete surrogate pair", "write the characters themselves");
            return null;
        }
    }

    private static string Shortened(string text) => text.Length <= 60 ? text : string.Concat(text.AsSpan(0, 60), "…");

    private static string WordFor(JsonValueKind kind) => kind switch
    {
        JsonValueKind.Array => "an array",
        JsonValueKind.Object => "an object",
        JsonValueKind.String => "a string",
        JsonValueKind.Number => "a number",
        JsonValueKind.Null => "null",
        _ => "true or false",
    };

    private static string NameOf(JsonProperty member)
    {
        try
        {
            return member.Name;
        }
        catch (InvalidOperationException)
        {
            return "(unreadable name)";
        }
    }

    private long? WholeOf(JsonElement value, string path, long minimum, long maximum)
    {
        if (value.ValueKind == JsonValueKind.Number && TryWhole(value, out long whole) && whole >= minimum && whole <= maximum)
        {
            return whole;
        }

        string found = value.ValueKind == JsonValueKind.Number
            ? $"{Shortened(value.GetRawText())} is not a whole number from {minimum} to {maximum}"
            : $"{WordFor(value.ValueKind)} stands where a whole number belongs";
        _problems.Add(path, found, string.Create(CultureInfo.InvariantCulture, $"give a whole number from {minimum} to {maximum}"));
        return null;
    }

    /// <summary>Takes 256 and also 256.0 or 2.56e2, which some programs write for whole numbers.</summary>
    private static bool TryWhole(JsonElement value, out long whole)
    {
        if (value.TryGetInt64(out whole))
        {
            return true;
        }

        double number = value.GetDouble();
        bool isWhole = Math.Abs(number) < 1L << 53 && number == Math.Floor(number);
        whole = isWhole ? (long)number : 0;
        return isWhole;
    }

    private bool Require(string key)
    {
        if (_members.ContainsKey(key))
        {
            return true;
        }

        _known.Add(key);
        _problems.Add(_path.Length == 0 ? null : _path, $"the required key \"{key}\" is missing", $"add \"{PathOf(key)}\"");
        return false;
    }

    private bool TryTake(string key, JsonValueKind kind, string wanted, out JsonElement value)
    {
        _known.Add(key);
        if (!_members.TryGetValue(key, out value))
        {
            return false;
        }

        if (value.ValueKind != kind)
        {
            _problems.Add(PathOf(key), $"{WordFor(value.ValueKind)} stands where {wanted} belongs", $"write {wanted}, or leave an optional key out");
            return false;
        }

        return true;
    }
}
