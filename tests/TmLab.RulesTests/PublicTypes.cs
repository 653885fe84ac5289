using System.Reflection;
using System.Runtime.CompilerServices;

namespace TmLab.RulesTests;

/// <summary>The types that users of the libraries see.</summary>
internal static class PublicTypes
{
    public static readonly string[] Libraries = ["TmLab.Numerics", "TmLab", "TmLab.Storage"];

    public static IEnumerable<Type> All => Libraries.SelectMany(l => Assembly.Load(l).GetExportedTypes());

    /// <summary>Records have a printer of members that the compiler makes.</summary>
    public static bool IsRecord(Type type) => type
        .GetMethods(BindingFlags.Instance | BindingFlags.Public | BindingFlags.NonPublic | BindingFlags.DeclaredOnly)
        .Any(m => m.Name == "PrintMembers" && m.IsDefined(typeof(CompilerGeneratedAttribute)));

    /// <summary>Whether a property can be set after the object is made.</summary>
    public static bool IsSettable(PropertyInfo property) =>
        property.SetMethod is { IsPublic: true } set
        && !set.ReturnParameter.GetRequiredCustomModifiers().Contains(typeof(IsExternalInit));
}
