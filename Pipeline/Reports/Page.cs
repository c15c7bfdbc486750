using System.Reflection;
using System.Security.Cryptography;
using System.Text;

namespace Pipeline.Reports;

/// <summary>The frame of every page: one file, nothing fetched, nothing run.</summary>
static class Page
{
    /// <summary>Shown on every page.</summary>
    public const string Caution = "This page is a record of measurements. It is no interlock and no safety device: lasers, high voltage, cryogens and magnets "
        + "are governed by the local rules and by licensed practice.";

    static readonly string Style = Load("page.css");

    /// <param name="title">Plain text.</param>
    /// <param name="body">Markup.</param>
    public static string Render(string title, Markup body)
    {
        string hash = Convert.ToBase64String(SHA256.HashData(Encoding.UTF8.GetBytes(Style)));
        var style = new Markup($"<style>{Style}</style>");
        var policy = new Markup($"<meta http-equiv=\"Content-Security-Policy\" content=\"default-src 'none'; style-src 'sha256-{hash}'; base-uri 'none'; form-action 'none'\">");
        return Html.Of($"<!doctype html>\n<html lang=\"en\"><head><meta charset=\"utf-8\">{policy}<meta name=\"viewport\" content=\"width=device-width, initial-scale=1\"><title>{title}</title>{style}</head>\n<body>\n{body}\n<p class=\"note\">{Caution}</p>\n</body></html>\n").Text;
    }

    static string Load(string name)
    {
        Assembly assembly = typeof(Page).Assembly;
        string resource = assembly.GetManifestResourceNames().Single(n => n.EndsWith(name, StringComparison.Ordinal));
        using var reader = new StreamReader(assembly.GetManifestResourceStream(resource)!, Encoding.UTF8);
        return reader.ReadToEnd().ReplaceLineEndings("\n");
    }
}
