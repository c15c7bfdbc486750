using System.Globalization;
using System.Net;
using System.Runtime.CompilerServices;
using System.Text;

namespace Pipeline.Reports;

/// <summary>Markup that needs no more encoding.</summary>
/// <param name="Text">The markup.</param>
public readonly record struct Markup(string Text)
{
    public static Markup None => new("");

    /// <summary>Pieces one after the other.</summary>
    public static Markup Join(IEnumerable<Markup> pieces) => new(string.Concat(pieces.Select(p => p.Text)));

    public override string ToString() => Text;
}

/// <summary>Builds markup from an interpolated string: every hole is encoded unless it is markup itself.</summary>
public static class Html
{
    public static Markup Of(HtmlHandler handler) => new(handler.ToText());
}

/// <summary>The writer behind <see cref="Html.Of"/>; escaping is its job, not the caller's.</summary>
[InterpolatedStringHandler]
public readonly ref struct HtmlHandler
{
    readonly StringBuilder _text;

    public HtmlHandler(int literalLength, int formattedCount) => _text = new StringBuilder(literalLength + 16 * formattedCount);

    public void AppendLiteral(string literal) => _text.Append(literal);

    public void AppendFormatted(Markup markup) => _text.Append(markup.Text);

    public void AppendFormatted(IEnumerable<Markup> pieces)
    {
        foreach (Markup piece in pieces) _text.Append(piece.Text);
    }

    public void AppendFormatted<T>(T value) =>
        _text.Append(WebUtility.HtmlEncode(value is IFormattable f ? f.ToString(null, CultureInfo.InvariantCulture) : value?.ToString()));

    internal string ToText() => _text.ToString();
}
