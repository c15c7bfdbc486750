using System.Globalization;
using Pipeline.Quantities;

namespace Pipeline.Configuration;

/// <summary>A table whose reader names every key it knows: what is left over at the end is unknown, and refused.</summary>
sealed class TomlTable(TomlPlace place, string path)
{
    readonly Dictionary<string, (TomlValue Value, TomlPlace Key)> _values = new(StringComparer.Ordinal);
    readonly HashSet<string> _known = new(StringComparer.Ordinal);

    public TomlPlace Place => place;
    public string Path => path;
    public IEnumerable<string> Keys => _values.Keys;

    /// <summary>"[probe] width".</summary>
    public string NameOf(string key) => path.Length == 0 ? key : $"[{path}] {key}";

    /// <summary>"probe.width": the path of a table below this one.</summary>
    public string PathOf(string key) => path.Length == 0 ? key : $"{path}.{key}";

    public void Set(string key, TomlValue value, TomlPlace at)
    {
        if (!_values.TryAdd(key, (value, at)))
            throw new DataFaultException(at.At(NameOf(key)), "the key a second time", "each key once", "remove one of them");
    }

    /// <summary>The table of this name below this one, made where there is none.</summary>
    public TomlTable Child(string key, TomlPlace at)
    {
        if (!_values.TryGetValue(key, out var found))
        {
            var child = new TomlTable(at, PathOf(key));
            _values[key] = (new TomlValue(child, at), at);
            return child;
        }
        return found.Value.Content switch
        {
            TomlTable table => table,
            List<TomlTable> list => list[^1],
            _ => throw new DataFaultException(at.At(NameOf(key)), "a value and a table of the same name", "one of them", "rename the table"),
        };
    }

    /// <summary>A new table at the end of the list of this name.</summary>
    public TomlTable Append(string key, TomlPlace at)
    {
        if (!_values.TryGetValue(key, out var found)) _values[key] = found = (new TomlValue(new List<TomlTable>(), at), at);
        if (found.Value.Content is not List<TomlTable> list)
            throw new DataFaultException(at.At(NameOf(key)), "a list of tables and a value of the same name", "one of them", "rename the table");
        list.Add(new TomlTable(at, PathOf(key)));
        return list[^1];
    }

    public bool Has(string key)
    {
        _known.Add(key);
        return _values.ContainsKey(key);
    }

    public Measured Quantity(string key, Dimension dimension) => Parse(key, Required(key, Example(dimension)), dimension);

    public Measured? OptionalQuantity(string key, Dimension dimension) => Has(key) ? Quantity(key, dimension) : null;

    public string Text(string key) => Required(key, "a string").Content is string text ? text : throw Wrong(key, "a string in quotes");

    public IReadOnlyList<string> Texts(string key) => Required(key, "[\"...\", \"...\"]").Content is string[] texts ? texts : throw Wrong(key, "a list of strings in brackets");

    public string? OptionalText(string key) => Has(key) ? Text(key) : null;

    /// <summary>One of a few words.</summary>
    public T Choice<T>(string key, params (string Word, T Value)[] words)
    {
        string typed = Text(key);
        foreach ((string word, T value) in words) if (word == typed) return value;
        throw new DataFaultException(_values[key].Value.Place.At(NameOf(key)), $"\"{typed}\"", $"one of {string.Join(", ", words.Select(w => w.Word))}",
            NearestName.Remedy(typed, words.Select(w => w.Word)));
    }

    public string Choice(string key, IEnumerable<string> words) => Choice(key, [.. words.Select(w => (w, w))]);

    public int Whole(string key, int low, int high)
    {
        if (Required(key, "a whole number").Content is not long value) throw Wrong(key, "a whole number");
        return value >= low && value <= high ? (int)value : throw Refuse(key, value.ToString(CultureInfo.InvariantCulture), $"{low} to {high}");
    }

    public double Number(string key) => Required(key, "a number").Content switch
    {
        long whole => whole,
        double real when double.IsFinite(real) => real,
        _ => throw Wrong(key, "a number"),
    };

    public bool Flag(string key) => Required(key, "true or false").Content is bool flag ? flag : throw Wrong(key, "true or false");

    public TomlTable Table(string key) => Required(key, "a table").Content as TomlTable ?? throw Wrong(key, "a table");

    public TomlTable? OptionalTable(string key) => Has(key) ? Table(key) : null;

    public IReadOnlyList<TomlTable> Tables(string key) =>
        !Has(key) ? [] : _values[key].Value.Content as List<TomlTable> ?? throw Wrong(key, $"tables, each under [[{key}]]");

    /// <summary>Whether the key holds a table rather than a plain value.</summary>
    public bool IsTable(string key) => Has(key) && _values[key].Value.Content is TomlTable;

    /// <summary>Refuses keys that no reader asked for.</summary>
    public void RefuseUnknown()
    {
        foreach ((string key, (TomlValue _, TomlPlace at)) in _values)
            if (!_known.Contains(key))
                throw new DataFaultException(at.At(NameOf(key)), $"unknown key \"{key}\"", $"one of {string.Join(", ", _known.Order(StringComparer.Ordinal))}",
                    NearestName.Remedy(key, _known));
    }

    /// <summary>Makes a record, and blames the key whose value is out of range.</summary>
    public T Build<T>(Func<T> make, IReadOnlyDictionary<string, string>? keyOf = null)
    {
        try { return make(); }
        catch (ArgumentOutOfRangeException e)
        {
            string member = e.ParamName ?? "", key = keyOf is not null && keyOf.TryGetValue(member, out string? named) ? named : SnakeCase(member);
            TomlPlace at = _values.TryGetValue(key, out var found) ? found.Value.Place : place;
            string text = e.Message.Split(" (Parameter", StringSplitOptions.None)[0].Trim();
            throw new DataFaultException(at.At(NameOf(key)), Convert.ToString(e.ActualValue, CultureInfo.InvariantCulture) ?? "", $"a value that {text}", "correct the value");
        }
    }

    /// <summary>A fault at the value of a key.</summary>
    public DataFaultException Refuse(string key, string found, string expected, string remedy = "correct the value") =>
        new(_values.TryGetValue(key, out var at) ? at.Value.Place.At(NameOf(key)) : place.At(NameOf(key)), found, expected, remedy);

    Measured Parse(string key, TomlValue value, Dimension dimension)
    {
        if (value.Content is not string text) throw Wrong(key, $"a string with unit, such as {Example(dimension)}");
        try { return QuantityText.Parse(text, dimension); }
        catch (FormatException e) { throw new DataFaultException(value.Place.At(NameOf(key)), $"\"{text}\"", e.Message, "correct the value"); }
    }

    TomlValue Required(string key, string expected)
    {
        _known.Add(key);
        if (_values.TryGetValue(key, out var found)) return found.Value;
        string? near = _values.Keys.Where(k => !_known.Contains(k)).FirstOrDefault(k => NearestName.Remedy(k, [key]).StartsWith("did", StringComparison.Ordinal));
        throw new DataFaultException(near is null ? place.At(NameOf(key)) : _values[near].Key.At(NameOf(near)), near is null ? "no such key" : $"key \"{near}\"",
            $"{key} = {expected}", near is null ? "add it" : $"did you mean \"{key}\"?");
    }

    DataFaultException Wrong(string key, string expected) => Refuse(key, _values[key].Value.Content switch
    {
        string text => $"\"{text}\"",
        TomlTable => "a table",
        List<TomlTable> => "a list of tables",
        string[] => "a list of strings",
        IFormattable number => number.ToString(null, CultureInfo.InvariantCulture),
        object other => other.ToString() ?? "",
    }, expected);

    static string Example(Dimension dimension) => dimension == Dimension.Fraction ? "\"0.25 ± 0.01\"" : $"\"1.50(2) {UnitTable.Accepted(dimension).Split(',')[0]}\"";

    static string SnakeCase(string member) =>
        string.Concat(member.Select((c, i) => char.IsUpper(c) ? (i > 0 ? "_" : "") + char.ToLowerInvariant(c) : c.ToString()));
}
