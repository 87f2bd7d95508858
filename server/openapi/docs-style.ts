/** Style of the readable page. Colours are the product's tokens, light and dark. */
export const docsStyle = `
:root { color-scheme: light dark; --ground: #E8ECEF; --plate: #F8FAFB; --scribe: #10183F; --soft: #515C7A; --hair: #C5CDD8; --dye: #2A37A8 }
@media (prefers-color-scheme: dark) { :root { --ground: #0B1239; --plate: #131C52; --scribe: #F2F5FF; --soft: #A8B3E3; --hair: #33407F; --dye: #8C9BFF } }
* { box-sizing: border-box }
body { margin: 0; overflow-wrap: anywhere; background: var(--ground); color: var(--scribe); font: 16px/1.5 'Space Grotesk', system-ui, sans-serif }
main { max-width: 920px; margin: 0 auto; padding: 16px }
h1 { font-size: 28px } h2 { font-size: 20px; margin: 32px 0 8px } h3 { font-size: 16px; margin: 24px 0 4px } h4 { font-size: 14px; margin: 16px 0 4px; color: var(--soft) }
small { color: var(--soft); font-size: 14px; font-weight: 400 }
a { color: var(--dye) } a:focus-visible, summary:focus-visible { outline: 2px solid var(--dye); outline-offset: 2px }
code { font: 14px/1.4 'Space Mono', ui-monospace, monospace; overflow-wrap: anywhere }
nav { display: flex; flex-wrap: wrap; gap: 4px 16px } nav a { padding: 10px 0 }
details { border-top: 1px solid var(--hair) } details:last-of-type { border-bottom: 1px solid var(--hair) }
summary { min-height: 44px; padding: 10px 4px; cursor: pointer } summary span { display: block; color: var(--soft); font-size: 14px }
.method { display: inline-block; min-width: 56px; color: var(--dye); font-weight: 700 }
.plate, section { background: var(--plate); border: 1px solid var(--hair); padding: 4px 16px 12px; margin: 0 0 12px; clip-path: polygon(0 0, calc(100% - 10px) 0, 100% 10px, 100% 100%, 0 100%) }
ul { padding-left: 20px; margin: 4px 0 } .members > li > code:first-child { font-weight: 700 } .members { list-style: none; padding-left: 12px; border-left: 1px solid var(--hair) }
`;
